using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>The mean log-loss: -ln of the probability that was given to what happened, in nats.</summary>
/// <param name="Mean">The weighted mean; NaN without labels.</param>
/// <param name="StandardError">
/// Its standard error as a weighted mean of independent labels, sqrt(sum w^2 (loss - mean)^2) / sum w.
/// Neighbouring labels of a drifting stream are not independent; then it is too small.
/// </param>
public readonly record struct LogLossMean(double Mean, double StandardError)
{
    /// <summary>The 95 % interval of the mean, by the normal distribution.</summary>
    public Interval Interval => Metrics.Interval.Around(Mean, NormalQuantiles.TwoSided95 * StandardError);

    /// <summary>The mean over groups of equal probabilities.</summary>
    public static LogLossMean Of(ReadOnlySpan<ScoreGroup> groups)
    {
        double weight = 0, sum = 0;
        foreach (ref readonly var group in groups)
        {
            weight += group.Weight;
            sum += Loss(group.Positive, -group.LogOdds) + Loss(group.Negative, group.LogOdds);
        }
        double mean = sum / weight, squares = 0;
        foreach (ref readonly var group in groups)
        {
            double ofPositive = Elementary.Softplus(-group.LogOdds) - mean, ofNegative = Elementary.Softplus(group.LogOdds) - mean;
            double perWeight = group.SquaredWeight / group.Weight;
            squares += perWeight * ((group.Positive > 0 ? group.Positive * (ofPositive * ofPositive) : 0)
                + (group.Negative > 0 ? group.Negative * (ofNegative * ofNegative) : 0));
        }
        return new LogLossMean(mean, Math.Sqrt(squares) / weight);
    }

    /// <summary>The mean from sums over labels.</summary>
    /// <param name="weight">Sum of w.</param>
    /// <param name="squaredWeight">Sum of w^2.</param>
    /// <param name="loss">Sum of w loss.</param>
    /// <param name="lossBySquaredWeight">Sum of w^2 loss.</param>
    /// <param name="squaredLoss">Sum of w^2 loss^2.</param>
    public static LogLossMean Of(double weight, double squaredWeight, double loss, double lossBySquaredWeight, double squaredLoss)
    {
        double mean = loss / weight;
        double squares = squaredLoss - 2 * mean * lossBySquaredWeight + mean * mean * squaredWeight;
        return new LogLossMean(mean, Math.Sqrt(Math.Max(squares, 0)) / weight);
    }

    private static double Loss(double weight, double margin) => weight > 0 ? weight * Elementary.Softplus(margin) : 0;
}
