using StreamLogit.Engine.Features;

namespace StreamLogit.Engine;

/// <summary>An event as it was scored, with the label that has become known for it. What it refers to is valid during the call only.</summary>
public readonly ref struct LabelledEvent
{
    /// <summary>The hash of the event's id.</summary>
    public required ulong IdHash { get; init; }

    /// <summary>The event, encoded as it was at scoring.</summary>
    public required EncodedVector Vector { get; init; }

    /// <summary>The log-odds of every setting of the bank at scoring.</summary>
    public required ReadOnlySpan<double> SettingLogOdds { get; init; }

    /// <summary>The log-odds that were published.</summary>
    public required double LogOdds { get; init; }

    /// <summary>0 or 1.</summary>
    public required int Label { get; init; }

    /// <summary>Its importance, 0 or more.</summary>
    public required double Weight { get; init; }

    /// <summary>The weight with which the event was learned with the other label, which this one corrects, to seven digits; 0 for a first label.</summary>
    public required double TakenBackWeight { get; init; }

    /// <summary>The stream's clock when it was scored, in microseconds since 1970.</summary>
    public required long ScoredAtMicroseconds { get; init; }

    /// <summary>The stream's clock now that the label is known.</summary>
    public required long KnownAtMicroseconds { get; init; }
}
