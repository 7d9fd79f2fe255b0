namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>A variant's mean losses over a period, less those of the reference.</summary>
/// <param name="LogLoss">Of the log-loss, in nats.</param>
/// <param name="Brier">Of the Brier score.</param>
/// <param name="Cost">Of the cost of decisions.</param>
public readonly record struct LossDifference(double LogLoss, double Brier, double Cost);
