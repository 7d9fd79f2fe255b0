using System.Collections.Immutable;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>
/// The goodness-of-fit statistic of Hosmer &amp; Lemeshow (Communications in Statistics A9, 1980, 1043): the sum over groups of (o - e)^2 / (e (1 - e/n)). It
/// depends on how the groups are made, so the rule of <see cref="Grouping"/> is part of the result.
/// </summary>
/// <param name="Statistic">The statistic; NaN without labels.</param>
/// <param name="Groups">How many groups it is over.</param>
public readonly record struct HosmerLemeshow(double Statistic, int Groups)
{
    /// <summary>
    /// The probability of so large a value where the probabilities hold, by the chi-square distribution with as many degrees of freedom as groups, which
    /// is right for probabilities published before their labels were known.
    /// </summary>
    public double PValue => ReferenceDistributions.ChiSquareTail(Statistic, Groups);

    /// <summary>The same with two degrees of freedom less, for probabilities fitted to these very labels.</summary>
    public double PValueOfFit => ReferenceDistributions.ChiSquareTail(Statistic, Groups - 2);

    /// <summary>The statistic over groups made by any rule of <see cref="Grouping"/>.</summary>
    public static HosmerLemeshow Of(ImmutableArray<CalibrationGroup> groups)
    {
        double statistic = 0;
        foreach (var group in groups)
        {
            // Weights count as repeated labels; their effective number keeps the statistic to its scale.
            double difference = group.Positive - group.Expected;
            double variance = group.Expected * (1 - group.MeanProbability);
            statistic += difference * difference / variance * (group.EffectiveCount / group.Weight);
        }
        return new HosmerLemeshow(groups.IsEmpty ? double.NaN : statistic, groups.Length);
    }
}
