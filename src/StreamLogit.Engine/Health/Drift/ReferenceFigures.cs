namespace StreamLogit.Engine.Health.Drift;

/// <summary>The period that drift is measured against.</summary>
/// <param name="FromMicroseconds">When it starts, in microseconds since 1970; null before the first event where that is the start.</param>
/// <param name="ToMicroseconds">When it ends.</param>
/// <param name="IsComplete">Whether it is over and held events; before that nothing is compared.</param>
/// <param name="Events">About how many events it has: the thinned ones counted as many times as they stand for.</param>
/// <param name="ObservedRate">The share of labels that are 1 among those that came in it; NaN without any.</param>
public sealed record ReferenceFigures(long? FromMicroseconds, long? ToMicroseconds, bool IsComplete, long Events, double ObservedRate);
