namespace StreamLogit.Engine.Health.Metrics;

/// <summary>Quantiles of the standard normal distribution (R 4.2.2, qnorm).</summary>
internal static class NormalQuantiles
{
    /// <summary>Half the width of a two-sided 95 % interval, in standard deviations.</summary>
    public const double TwoSided95 = 1.959963984540054;

    /// <summary>Half the width of a two-sided 80 % interval, in standard deviations.</summary>
    public const double TwoSided80 = 1.2815515655446004;
}
