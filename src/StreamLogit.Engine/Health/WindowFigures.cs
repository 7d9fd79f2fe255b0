using System.Collections.Immutable;
using StreamLogit.Engine.Health.Drift;

namespace StreamLogit.Engine.Health;

/// <summary>Figures over a window.</summary>
/// <param name="Name">The window as the definition writes it, or <c>last 10000 labels</c>.</param>
/// <param name="Figures">Its figures.</param>
public sealed record WindowFigures(string Name, HealthFigures Figures)
{
    /// <summary>
    /// When it starts, in microseconds since 1970: a full minute, hour or day, depending on its length; null for the window of the last labels.
    /// It ends with the stream's clock.
    /// </summary>
    public long? FromMicroseconds { get; init; }

    /// <summary>What happened on the stream; null for the window of the last labels and for slices.</summary>
    public StreamFigures? Stream { get; init; }

    /// <summary>The settings of the bank, in its order, with their mean weight in the blend; empty for the window of the last labels and for slices.</summary>
    public ImmutableArray<SettingFigures> Settings { get; init; } = [];

    /// <summary>How the features drifted; null for the window of the last labels and for slices.</summary>
    public DriftFigures? Drift { get; init; }

    /// <summary>Whether name and figures are equal, and what else stands beside them but drift.</summary>
    public bool Equals(WindowFigures? other) =>
        other is not null && Name == other.Name && Figures == other.Figures && FromMicroseconds == other.FromMicroseconds
        && Stream == other.Stream && Settings.SequenceEqual(other.Settings);

    /// <inheritdoc/>
    public override int GetHashCode() => Name.Length;
}
