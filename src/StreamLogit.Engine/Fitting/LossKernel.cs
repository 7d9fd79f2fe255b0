using System.Runtime.Intrinsics;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Fitting;

/// <summary>The log-loss of rows with its first and second derivative by the log-odds. Rows lie in the lanes, so that every width gives the same bits.</summary>
internal static class LossKernel
{
    /// <summary>Computes all three for each row.</summary>
    /// <param name="logOdds">The rows' log-odds; its length is a multiple of 8.</param>
    /// <param name="signs">-1 where the label is 1, and 1 where it is 0.</param>
    /// <param name="weights">The rows' weights, 0 behind the last one.</param>
    /// <param name="losses">Receives weight * log-loss in nats.</param>
    /// <param name="slopes">Receives the derivative of that.</param>
    /// <param name="curvatures">Receives the second derivative.</param>
    public static void Run(
        ReadOnlySpan<double> logOdds, ReadOnlySpan<double> signs, ReadOnlySpan<double> weights,
        Span<double> losses, Span<double> slopes, Span<double> curvatures)
    {
        if (Vector512.IsHardwareAccelerated) Run<Lanes8>(logOdds, signs, weights, losses, slopes, curvatures);
        else if (Vector256.IsHardwareAccelerated) Run<Lanes4>(logOdds, signs, weights, losses, slopes, curvatures);
        else if (Vector128.IsHardwareAccelerated) Run<Lanes2>(logOdds, signs, weights, losses, slopes, curvatures);
        else Run<Lanes1>(logOdds, signs, weights, losses, slopes, curvatures);
    }

    internal static void Run<T>(
        ReadOnlySpan<double> logOdds, ReadOnlySpan<double> signs, ReadOnlySpan<double> weights,
        Span<double> losses, Span<double> slopes, Span<double> curvatures) where T : struct, ILanes<T>
    {
        for (int i = 0; i <= logOdds.Length - T.Width; i += T.Width)
        {
            T sign = T.Load(in signs[i], 0);
            T weight = T.Load(in weights[i], 0);
            T againstLabel = T.Load(in logOdds[i], 0) * sign;
            T e = LaneMath.Exp(T.Of(0) - T.Abs(againstLabel));
            T divisor = T.Of(1) + e;
            T miss = LaneMath.SigmoidOf(againstLabel, e);
            (weight * LaneMath.SoftplusOf(againstLabel, e)).Store(ref losses[i], 0);
            (weight * sign * miss).Store(ref slopes[i], 0);
            (weight * (e / (divisor * divisor))).Store(ref curvatures[i], 0);
        }
    }
}
