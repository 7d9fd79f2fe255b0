using MathNet.Numerics;
using MathNet.Numerics.Distributions;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>
/// Tail probabilities that tests are compared with. Only for what people read: their last bits depend on the machine's library of
/// elementary functions, so nothing that decides anything may use them.
/// </summary>
internal static class ReferenceDistributions
{
    /// <summary>The probability that a chi-square variable is at least <paramref name="statistic"/>.</summary>
    public static double ChiSquareTail(double statistic, double degreesOfFreedom)
    {
        if (double.IsNaN(statistic) || !(degreesOfFreedom > 0)) return double.NaN;
        return statistic <= 0 ? 1 : SpecialFunctions.GammaUpperRegularized(degreesOfFreedom / 2, statistic / 2);
    }

    /// <summary>The value that a chi-square variable stays under with the given probability.</summary>
    public static double ChiSquareQuantile(double probability, double degreesOfFreedom) =>
        degreesOfFreedom > 0 ? ChiSquared.InvCDF(degreesOfFreedom, probability) : double.NaN;

    /// <summary>The probability that a standard normal variable is at least as far from 0 as <paramref name="z"/>.</summary>
    public static double NormalTwoSidedTail(double z) => double.IsNaN(z) ? double.NaN : SpecialFunctions.Erfc(Math.Abs(z) / Math.Sqrt(2));
}
