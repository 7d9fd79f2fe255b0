using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>Log-likelihood, score and information of log-odds a + b z at one a and b.</summary>
internal readonly struct CoxSums
{
    public double LogLikelihood { get; private init; }

    public double Score0 { get; private init; }

    public double Score1 { get; private init; }

    public double Information00 { get; private init; }

    public double Information01 { get; private init; }

    public double Information11 { get; private init; }

    public double Determinant => Information00 * Information11 - Information01 * Information01;

    /// <param name="groups">The groups; those of infinite log-odds are left out.</param>
    /// <param name="intercept">a.</param>
    /// <param name="slope">b.</param>
    /// <param name="positives">The sum of the weights of the labels that are 1.</param>
    /// <param name="momentum">The sum of weight times log-odds over them.</param>
    public static CoxSums At(ReadOnlySpan<ScoreGroup> groups, double intercept, double slope, double positives, double momentum)
    {
        double softplus = 0, expected = 0, expectedMomentum = 0, i00 = 0, i01 = 0, i11 = 0;
        foreach (ref readonly var group in groups)
        {
            double z = group.LogOdds;
            if (!double.IsFinite(z)) continue;
            double logOdds = intercept + slope * z;
            double p = Elementary.Sigmoid(logOdds);
            double variance = group.Weight * (p * (1 - p));
            softplus += group.Weight * Elementary.Softplus(logOdds);
            expected += group.Weight * p;
            expectedMomentum += group.Weight * p * z;
            i00 += variance;
            i01 += variance * z;
            i11 += variance * z * z;
        }
        return new CoxSums
        {
            LogLikelihood = intercept * positives + slope * momentum - softplus,
            Score0 = positives - expected,
            Score1 = momentum - expectedMomentum,
            Information00 = i00,
            Information01 = i01,
            Information11 = i11,
        };
    }
}
