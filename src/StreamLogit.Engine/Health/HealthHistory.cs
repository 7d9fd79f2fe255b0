using System.Collections.Immutable;

namespace StreamLogit.Engine.Health;

/// <summary>
/// The past in minutes, hours and days, each as far back as the definition keeps it, oldest first. Times in which nothing happened are left out. The last hour and day are as they stand at the last full minute.
/// </summary>
/// <param name="Minutes">Minutes that are over.</param>
/// <param name="Hours">Hours, the present one included.</param>
/// <param name="Days">Days, the present one included.</param>
public sealed record HealthHistory(
    ImmutableArray<HistoryPoint> Minutes, ImmutableArray<HistoryPoint> Hours, ImmutableArray<HistoryPoint> Days)
{
    /// <summary>Without any past.</summary>
    public static HealthHistory Empty { get; } = new([], [], []);
}
