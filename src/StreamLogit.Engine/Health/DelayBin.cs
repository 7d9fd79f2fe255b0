using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Health;

/// <summary>Labels that took about as long as each other.</summary>
/// <param name="Seconds">How long, from and to.</param>
/// <param name="Labels">How many.</param>
public readonly record struct DelayBin(Interval Seconds, double Labels);
