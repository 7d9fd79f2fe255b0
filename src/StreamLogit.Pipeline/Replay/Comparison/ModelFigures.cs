namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>How one model's probabilities did, weighted by the labels' weights.</summary>
/// <param name="LogLoss">Mean log-loss, in nats.</param>
/// <param name="Brier">Mean (p - y)^2.</param>
/// <param name="Cost">Mean cost of the decisions.</param>
/// <param name="MeanProbability">The mean probability, which a calibrated model has at the observed rate.</param>
/// <param name="Auc">The area under the ROC curve, with log-odds in bins 0.05 wide; NaN where it was not compared or one label is missing.</param>
public readonly record struct ModelFigures(double LogLoss, double Brier, double Cost, double MeanProbability, double Auc);
