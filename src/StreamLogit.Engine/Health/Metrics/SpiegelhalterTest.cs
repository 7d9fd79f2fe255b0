namespace StreamLogit.Engine.Health.Metrics;

/// <summary>
/// Spiegelhalter's test that the Brier score is the one that the probabilities themselves promise (Statistics in Medicine 5, 1986, 421):
/// Z = sum (y - p)(1 - 2p) / sqrt(sum (1 - 2p)^2 p (1 - p)), about standard normal where they hold.
/// </summary>
/// <param name="Numerator">Sum of w (y - p)(1 - 2p).</param>
/// <param name="Variance">Sum of w^2 (1 - 2p)^2 p (1 - p).</param>
public readonly record struct SpiegelhalterTest(double Numerator, double Variance)
{
    /// <summary>The statistic: above 0 where the Brier score is worse than promised.</summary>
    public double Z => Numerator / Math.Sqrt(Variance);

    /// <summary>The probability of a value at least as far from 0 where the probabilities hold.</summary>
    public double PValue => ReferenceDistributions.NormalTwoSidedTail(Z);

    /// <summary>The test over groups of equal probabilities.</summary>
    public static SpiegelhalterTest Of(ReadOnlySpan<ScoreGroup> groups)
    {
        double numerator = 0, variance = 0;
        foreach (ref readonly var group in groups)
        {
            double p = group.MeanProbability, lever = 1 - 2 * p;
            numerator += (group.Positive - group.Probability) * lever;
            variance += group.SquaredWeight * (lever * lever * p * (1 - p));
        }
        return new SpiegelhalterTest(numerator, variance);
    }
}
