namespace StreamLogit.Engine.Definition;

/// <summary>
/// Keeps every event whose published probability reaches a bound, and one in some of the rest, which then counts for as many in learning and health,
/// so that both stay unbiased (inverse probability weighting, Horvitz &amp; Thompson 1952).
/// </summary>
/// <param name="Above">The probability from which on every event is kept, 0 to 1.</param>
/// <param name="OneIn">Of the events below, one in this many is kept, at least 1; which ones, the hash of the id decides.</param>
public sealed record ThinningOptions(double Above, int OneIn);
