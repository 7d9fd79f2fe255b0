namespace StreamLogit.Engine.Health.Metrics;

/// <summary>The score interval of a proportion (Wilson, JASA 22, 1927, 209).</summary>
public static class WilsonInterval
{
    /// <summary>The 95 % interval, always within 0 to 1.</summary>
    /// <param name="share">The observed proportion, 0 to 1.</param>
    /// <param name="trials">
    /// Of how many; of weighted labels their effective number, (sum of weights)^2 / (sum of squared weights).
    /// </param>
    public static Interval Of(double share, double trials) => Of(share, trials, NormalQuantiles.TwoSided95);

    /// <summary>The interval of <paramref name="z"/> standard deviations to both sides.</summary>
    public static Interval Of(double share, double trials, double z)
    {
        if (!(trials > 0)) return Interval.None;
        double z2 = z * z;
        double middle = (share + z2 / (2 * trials)) / (1 + z2 / trials);
        double margin = z / (1 + z2 / trials) * Math.Sqrt(share * (1 - share) / trials + z2 / (4 * trials * trials));
        return Interval.Around(middle, margin).Within(0, 1);
    }
}
