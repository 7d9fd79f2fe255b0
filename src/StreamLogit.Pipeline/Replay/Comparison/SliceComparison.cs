using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>The comparison over the events of a slice.</summary>
/// <param name="Name">The slice.</param>
/// <param name="Count">Labels.</param>
/// <param name="ObservedRate">The weighted share of ones among them.</param>
/// <param name="Reference">The reference's figures, without AUC.</param>
/// <param name="Variants">The differences, in the variants' order.</param>
public sealed record SliceComparison(
    string Name, long Count, double ObservedRate, ModelFigures Reference, ImmutableArray<VariantDifferences> Variants);
