using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>Variants against a reference, on the same labels.</summary>
public sealed record ComparisonResult
{
    /// <summary>Labels.</summary>
    public required long Count { get; init; }

    /// <summary>The weighted share of ones among them.</summary>
    public required double ObservedRate { get; init; }

    /// <summary>The reference.</summary>
    public required string ReferenceName { get; init; }

    /// <summary>Its figures.</summary>
    public required ModelFigures Reference { get; init; }

    /// <summary>The variants, in their order.</summary>
    public required ImmutableArray<VariantComparison> Variants { get; init; }

    /// <summary>The days, in their order.</summary>
    public required ImmutableArray<ComparisonPeriod> Days { get; init; }

    /// <summary>The slices, in the order in which they came up.</summary>
    public required ImmutableArray<SliceComparison> Slices { get; init; }

    /// <summary>The share of intervals that hold the lasting difference.</summary>
    public required double Level { get; init; }

    /// <summary>The blocks of time that the intervals are made of. With fewer than 10 they are rough.</summary>
    public required int Blocks { get; init; }

    /// <summary>How long a block is: a day where there are enough of them.</summary>
    public required long BlockMicroseconds { get; init; }
}
