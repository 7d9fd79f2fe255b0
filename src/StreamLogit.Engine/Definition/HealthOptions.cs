using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>How the published probabilities are checked: over which windows, for which slices, and when to raise an alarm.</summary>
public sealed record HealthOptions
{
    /// <summary>The windows, on the stream's clock. Default 1 h, 1 d and 7 d.</summary>
    public ImmutableArray<HealthWindow> Windows { get; init; } =
        [new("1h", 3600L * 1_000_000), new("1d", 24 * 3600L * 1_000_000), new("7d", 7 * 24 * 3600L * 1_000_000)];

    /// <summary>The length of the window that counts labels instead of time, 1 to 1,000,000. Default 10,000.</summary>
    public int LastLabels { get; init; } = 10_000;

    /// <summary>The paths of up to four fields by whose values health is told apart. Default none.</summary>
    public ImmutableArray<string> Slices { get; init; } = [];

    /// <summary>How many values of each such field are told apart, the most frequent ones, 1 to 62; the rest are taken together. Default 8.</summary>
    public int SliceValues { get; init; } = 8;

    /// <summary>How far back the history is kept.</summary>
    public HealthHistoryOptions History { get; init; } = new();

    /// <summary>The period that drift is measured against.</summary>
    public HealthReferenceOptions Reference { get; init; } = new();

    /// <summary>
    /// How many labels may pass, on average, between two false alarms of the change detectors while nothing changes, 1,000 to 1e12. Default 1,000,000.
    /// </summary>
    public long LabelsPerFalseAlarm { get; init; } = 1_000_000;

    /// <summary>How many labels pass at the start before the change detectors watch. Default 1,000.</summary>
    public long DetectAfterLabels { get; init; } = 1_000;

    /// <summary>The alarms. Default none.</summary>
    public ImmutableArray<AlarmOptions> Alarms { get; init; } = [];
}
