using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>A day of the comparison, or several where the stream has more than 4,096 of them.</summary>
/// <param name="StartMicroseconds">Its midnight (UTC), in microseconds since 1970.</param>
/// <param name="Count">Labels.</param>
/// <param name="ObservedRate">The weighted share of ones among them.</param>
/// <param name="Reference">The reference's figures, without AUC.</param>
/// <param name="Variants">The differences, in the variants' order.</param>
public sealed record ComparisonPeriod(
    long StartMicroseconds, long Count, double ObservedRate, ModelFigures Reference, ImmutableArray<LossDifference> Variants);
