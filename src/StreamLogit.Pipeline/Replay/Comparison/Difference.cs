namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>A figure of a variant less that of the reference, with the interval in which the lasting difference lies at the comparison's level.</summary>
/// <param name="Value">The difference. Below 0 the variant loses less; of AUC, above 0 it tells the labels apart better.</param>
/// <param name="Low">The lower end, NaN where there are fewer than two blocks of time.</param>
/// <param name="High">The upper end, NaN as <paramref name="Low"/>.</param>
public readonly record struct Difference(double Value, double Low, double High);
