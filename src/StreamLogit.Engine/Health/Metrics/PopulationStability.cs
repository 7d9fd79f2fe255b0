using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>
/// The population stability index of two distributions over the same cells, sum (a - r) ln(a / r) of their shares: the Kullback-Leibler divergences in both
/// directions added up (Jeffreys 1946), in nats.
/// </summary>
public static class PopulationStability
{
    /// <summary>The index. Infinite where a cell is empty in one of them only, unless <paramref name="pseudoCount"/> is above 0.</summary>
    /// <param name="reference">Counts or shares of the reference.</param>
    /// <param name="actual">Counts or shares of what is compared with it.</param>
    /// <param name="pseudoCount">Added to every cell of both, so that empty cells stay finite.</param>
    public static double Of(ReadOnlySpan<double> reference, ReadOnlySpan<double> actual, double pseudoCount = 0)
    {
        if (reference.Length != actual.Length) throw new ArgumentException("Both must have the same cells.", nameof(actual));
        double referenceTotal = 0, actualTotal = 0;
        for (int i = 0; i < reference.Length; i++)
        {
            referenceTotal += reference[i] + pseudoCount;
            actualTotal += actual[i] + pseudoCount;
        }
        double index = 0;
        for (int i = 0; i < reference.Length; i++)
        {
            double r = (reference[i] + pseudoCount) / referenceTotal, a = (actual[i] + pseudoCount) / actualTotal;
            if (r != a) index += (a - r) * (Elementary.Log(a) - Elementary.Log(r));
        }
        return index;
    }

    /// <summary>
    /// The index that chance alone gives on average where nothing changed: (cells - 1)(1/n + 1/m) for samples of n and m, to first order.
    /// </summary>
    public static double ByChance(int cells, double referenceCount, double actualCount) =>
        (cells - 1) * (1 / referenceCount + 1 / actualCount);

    /// <summary>
    /// The index that chance alone exceeds once in twenty times: the 95 % quantile of chi-square with cells - 1 degrees of freedom times (1/n + 1/m)
    /// (Yurdakul, Statistical Properties of Population Stability Index, 2018).
    /// </summary>
    public static double ByChance95(int cells, double referenceCount, double actualCount) =>
        ReferenceDistributions.ChiSquareQuantile(0.95, cells - 1) * (1 / referenceCount + 1 / actualCount);
}
