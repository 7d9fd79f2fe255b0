using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>Over which windows health is reported.</summary>
public sealed record HealthOptions
{
    /// <summary>The windows, on the stream's clock. Default 1 h, 1 d and 7 d.</summary>
    public ImmutableArray<HealthWindow> Windows { get; init; } =
        [new("1h", 3600L * 1_000_000), new("1d", 24 * 3600L * 1_000_000), new("7d", 7 * 24 * 3600L * 1_000_000)];

    /// <summary>The length of the window that counts labels instead of time. Default 10,000.</summary>
    public int LastLabels { get; init; } = 10_000;
}
