using System.Runtime.Intrinsics;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Fitting;

/// <summary>What the log-odds of many variants for one event lose, whichever its label is. Variants lie in the lanes, so that every width gives the same bits.</summary>
public static class VariantLosses
{
    /// <summary>Computes, for each log-odds, the probability and the log-loss of both labels.</summary>
    /// <param name="logOdds">The variants' log-odds, finite.</param>
    /// <param name="probabilities">Receives 1 / (1 + e^-logOdds).</param>
    /// <param name="lossesOfZero">Receives the log-loss of label 0, in nats: ln(1 + e^logOdds).</param>
    /// <param name="lossesOfOne">Receives the log-loss of label 1, in nats: ln(1 + e^-logOdds).</param>
    public static void Compute(
        ReadOnlySpan<double> logOdds, Span<double> probabilities, Span<double> lossesOfZero, Span<double> lossesOfOne)
    {
        int done = 0;
        if (Vector512.IsHardwareAccelerated) done = Run<Lanes8>(logOdds, probabilities, lossesOfZero, lossesOfOne, done);
        if (Vector256.IsHardwareAccelerated) done = Run<Lanes4>(logOdds, probabilities, lossesOfZero, lossesOfOne, done);
        if (Vector128.IsHardwareAccelerated) done = Run<Lanes2>(logOdds, probabilities, lossesOfZero, lossesOfOne, done);
        Run<Lanes1>(logOdds, probabilities, lossesOfZero, lossesOfOne, done);
    }

    internal static int Run<T>(
        ReadOnlySpan<double> logOdds, Span<double> probabilities, Span<double> lossesOfZero, Span<double> lossesOfOne, int from)
        where T : struct, ILanes<T>
    {
        int i = from;
        for (; i <= logOdds.Length - T.Width; i += T.Width)
        {
            T z = T.Load(in logOdds[i], 0);
            T e = LaneMath.Exp(T.Of(0) - T.Abs(z));
            LaneMath.SigmoidOf(z, e).Store(ref probabilities[i], 0);
            T common = LaneMath.Log1pOfUnit(e);
            T isPositive = T.Greater(z, T.Of(0));
            (T.Select(isPositive, z, T.Of(0)) + common).Store(ref lossesOfZero[i], 0);
            (T.Select(isPositive, T.Of(0), T.Of(0) - z) + common).Store(ref lossesOfOne[i], 0);
        }
        return i;
    }
}
