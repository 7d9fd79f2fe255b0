namespace StreamLogit.Engine.Definition;

/// <summary>How far back health keeps its history, on the stream's clock.</summary>
public sealed record HealthHistoryOptions
{
    /// <summary>How many minutes are kept one by one, 60 to 10,080. Windows up to this long are told to the minute. Default 6 hours.</summary>
    public int Minutes { get; init; } = 6 * 60;

    /// <summary>How many hours are kept one by one, 24 to 8,784. Longer windows start at a full hour. Default 60 days.</summary>
    public int Hours { get; init; } = 60 * 24;

    /// <summary>How many days are kept one by one, 7 to 3,660. Still longer windows start at a full day. Default 730.</summary>
    public int Days { get; init; } = 730;
}
