namespace StreamLogit.Engine.Definition;

/// <summary>An alarm: a metric over a window against a bound.</summary>
public sealed record AlarmOptions
{
    /// <summary>Its name, which no other alarm has.</summary>
    public required string Name { get; init; }

    /// <summary>What is looked at.</summary>
    public required AlarmMetric Metric { get; init; }

    /// <summary>The window: the name of one of <see cref="HealthOptions.Windows"/>.</summary>
    public required HealthWindow Window { get; init; }

    /// <summary>The bound, in the unit of the metric.</summary>
    public required double Bound { get; init; }

    /// <summary>Whether it is raised above the bound; else below it. Default above.</summary>
    public bool IsAbove { get; init; } = true;

    /// <summary>
    /// How many labels the window must hold before the metric counts; for metrics of the stream and of drift, how many events. Default 100.
    /// </summary>
    public long Minimum { get; init; } = 100;

    /// <summary>For how long, in microseconds of the stream's clock, the metric must stay beyond the bound. Default 0: at once.</summary>
    public long ForMicroseconds { get; init; }

    /// <summary>For drift: the name of the one feature that is looked at, or null for the one that is worst.</summary>
    public string? Feature { get; init; }

    /// <summary>The path of a sliced field, where the alarm looks at one of its values only; else null.</summary>
    public string? SliceField { get; init; }

    /// <summary>The value of that field.</summary>
    public string? SliceValue { get; init; }
}
