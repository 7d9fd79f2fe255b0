namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>A variant's figures less those of the reference, with their intervals.</summary>
/// <param name="LogLoss">Of the mean log-loss, in nats.</param>
/// <param name="Brier">Of the Brier score.</param>
/// <param name="Cost">Of the mean cost of decisions.</param>
public readonly record struct VariantDifferences(Difference LogLoss, Difference Brier, Difference Cost);
