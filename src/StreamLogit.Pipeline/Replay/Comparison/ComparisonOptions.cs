namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>How variants are compared.</summary>
public sealed record ComparisonOptions
{
    /// <summary>The share of intervals that hold the lasting difference, above 0 and below 1. Default 0.9.</summary>
    public double Level { get; init; } = 0.9;

    /// <summary>Resamples of the bootstrap, 100 or more. Default 1000.</summary>
    public int Resamples { get; init; } = 1000;

    /// <summary>The seed of the bootstrap. Default 1.</summary>
    public ulong Seed { get; init; } = 1;

    /// <summary>What decisions cost.</summary>
    public DecisionCost Cost { get; init; } = DecisionCost.OfCutoff(0.5);

    /// <summary>Whether AUC is compared, which takes 0.4 MB a variant. Default true.</summary>
    public bool CompareAuc { get; init; } = true;
}
