using System.Collections.Immutable;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>
/// The Brier score taken apart over groups of probabilities (Murphy, Journal of Applied Meteorology 12, 1973, 595), with the part that groups of unequal
/// probabilities leave over (Stephenson, Coelho &amp; Jolliffe, Weather and Forecasting 23, 2008, 752):
/// Brier = Reliability - Resolution + Uncertainty + WithinGroups.
/// </summary>
/// <param name="Reliability">Mean squared distance of the groups' mean probability from their observed rate; 0 is perfect.</param>
/// <param name="Resolution">Mean squared distance of the groups' observed rate from the overall one; more is better.</param>
/// <param name="Uncertainty">The variance of the labels, o(1 - o).</param>
/// <param name="WithinGroups">
/// The variance of the probabilities within groups less twice their covariance with the labels there; 0 where groups hold equal probabilities.
/// </param>
public readonly record struct BrierDecomposition(double Reliability, double Resolution, double Uncertainty, double WithinGroups)
{
    /// <summary>The Brier score put together again from its parts.</summary>
    public double Brier => Reliability - Resolution + Uncertainty + WithinGroups;

    /// <summary>The share of the base rate's Brier score that is saved: 1 - Brier / Uncertainty.</summary>
    public double SkillScore => 1 - Brier / Uncertainty;

    /// <summary>The parts of a Brier score over groups made by any rule of <see cref="Grouping"/>.</summary>
    /// <param name="groups">The groups.</param>
    /// <param name="brier">The mean of weight (p - y)^2 over the same labels.</param>
    public static BrierDecomposition Of(ImmutableArray<CalibrationGroup> groups, double brier)
    {
        double weight = 0, positive = 0;
        foreach (var group in groups)
        {
            weight += group.Weight;
            positive += group.Positive;
        }
        double rate = positive / weight;
        double reliability = 0, resolution = 0;
        foreach (var group in groups)
        {
            double miss = group.MeanProbability - group.ObservedRate, departure = group.ObservedRate - rate;
            reliability += group.Weight * (miss * miss);
            resolution += group.Weight * (departure * departure);
        }
        reliability /= weight;
        resolution /= weight;
        double uncertainty = rate * (1 - rate);
        return new BrierDecomposition(reliability, resolution, uncertainty, brier - (reliability - resolution + uncertainty));
    }

    /// <summary>The variance of the probabilities within equal-width groups, and twice their covariance with the labels, of single predictions.</summary>
    public static (double Variance, double TwiceCovariance) WithinEqualWidth(ReadOnlySpan<ScoreGroup> groups, int count)
    {
        double variance = 0, covariance = 0, total = 0;
        for (int start = 0, end; start < groups.Length; start = end)
        {
            int number = NumberOf(groups[start], count);
            double weight = 0, probability = 0, positive = 0;
            for (end = start; end < groups.Length && NumberOf(groups[end], count) == number; end++)
            {
                weight += groups[end].Weight;
                probability += groups[end].Probability;
                positive += groups[end].Positive;
            }
            foreach (ref readonly var group in groups[start..end])
            {
                double departure = group.MeanProbability - probability / weight;
                variance += group.Weight * (departure * departure);
                covariance += departure * (group.Positive - group.Weight * (positive / weight));
            }
            total += weight;
        }
        return (variance / total, 2 * covariance / total);
    }

    private static int NumberOf(in ScoreGroup group, int count) => Math.Min((int)(group.MeanProbability * count), count - 1);
}
