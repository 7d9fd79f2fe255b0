using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Health;

/// <summary>
/// Figures of the published probabilities over some labels; every mean is weighted by the records' weights and NaN without any. Immutable. What takes
/// long to compute is computed when it is first read, on whichever thread reads it.
/// </summary>
/// <param name="Count">Labels.</param>
/// <param name="Weight">The sum of their weights.</param>
/// <param name="LogLoss">Mean -ln of the probability that was published for what happened, in nats.</param>
/// <param name="BaseRateLogLoss">The same for the Krichevsky-Trofimov predictor, which knows only how often labels were 1 so far.</param>
/// <param name="Brier">Mean (p - y)^2 (Brier 1950, for two classes), 0 to 1.</param>
/// <param name="MeanProbability">Mean published probability.</param>
/// <param name="ObservedRate">Share of labels that are 1.</param>
public sealed record HealthFigures(
    long Count, double Weight, double LogLoss, double BaseRateLogLoss, double Brier, double MeanProbability, double ObservedRate)
{
    /// <summary>The effective number of labels: (sum of weights)^2 / (sum of squared weights), which is their number where all weights are equal.</summary>
    public double EffectiveCount { get; init; } = double.NaN;

    /// <summary>The standard error of <see cref="LogLoss"/>, as of independent labels.</summary>
    public double LogLossStandardError { get; init; } = double.NaN;

    /// <summary>The 95 % interval of <see cref="LogLoss"/>, as of independent labels.</summary>
    public Interval LogLossInterval => new LogLossMean(LogLoss, LogLossStandardError).Interval;

    /// <summary>Log-loss over that of the base rate: below 1 the model helps, above 1 it does harm.</summary>
    public double LogLossRatio => LogLoss / BaseRateLogLoss;

    /// <summary>The labels 1 that were promised and those that came.</summary>
    public PromisedPositives Promised { get; init; }

    /// <summary>The labels of events whose decision was <c>alert</c>.</summary>
    public AlertFigures Alerts { get; init; } = AlertFigures.None;

    /// <summary>Spiegelhalter's test of calibration, exact.</summary>
    public SpiegelhalterTest Spiegelhalter { get; init; }

    /// <summary>The labels by their published log-odds: AUC, calibration, reliability. Empty in points of a history.</summary>
    public ScoreDistribution Scores { get; init; } = ScoreDistribution.Empty;

    internal static HealthFigures Of(in LabelSums sums, ScoreDistribution scores)
    {
        double weight = sums.Weight;
        var logLoss = LogLossMean.Of(weight, sums.SquaredWeight, sums.LogLoss, sums.LogLossBySquaredWeight, sums.SquaredLogLoss);
        return new HealthFigures(
            (long)sums.Count, weight, sums.LogLoss / weight, sums.BaseRateLogLoss / weight, sums.Brier / weight, sums.Probability / weight, sums.Positive / weight)
        {
            EffectiveCount = weight * weight / sums.SquaredWeight,
            LogLossStandardError = logLoss.StandardError,
            Promised = new PromisedPositives(sums.Probability, sums.Variance, sums.Positive),
            Alerts = AlertFigures.Of(sums),
            Spiegelhalter = new SpiegelhalterTest(sums.SpiegelhalterNumerator, sums.SpiegelhalterVariance),
            Scores = scores,
        };
    }
}
