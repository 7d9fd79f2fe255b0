namespace StreamLogit.Engine.Health;

/// <summary>Figures of the published probabilities over some labels; every mean is weighted by the records' weights and NaN without any.</summary>
/// <param name="Count">Labels.</param>
/// <param name="Weight">The sum of their weights.</param>
/// <param name="LogLoss">Mean -ln of the probability that was published for what happened, in nats.</param>
/// <param name="BaseRateLogLoss">The same for the Krichevsky-Trofimov predictor, which knows only how often labels were 1 so far.</param>
/// <param name="Brier">Mean (p - y)^2 (Brier 1950, for two classes), 0 to 1.</param>
/// <param name="MeanProbability">Mean published probability.</param>
/// <param name="ObservedRate">Share of labels that are 1.</param>
public sealed record HealthFigures(
    long Count, double Weight, double LogLoss, double BaseRateLogLoss, double Brier, double MeanProbability, double ObservedRate);
