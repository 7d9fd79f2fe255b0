using MathNet.Numerics.Distributions;

namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>
/// Intervals of figures by the block bootstrap (Carlstein, Annals of Statistics 14, 1986, 1171): blocks of time are drawn with replacement, whole, so that
/// what hangs together within a block stays together. All figures are computed on the same draws. The interval lies between quantiles of the draws,
/// widened for few blocks (Hesterberg, The American Statistician 69, 2015, 371, the expanded percentile interval).
/// </summary>
internal sealed class BlockBootstrap(int blocks, int resamples, double level, ulong seed)
{
    /// <summary>Computes the intervals.</summary>
    /// <param name="sums">The sums of each block.</param>
    /// <param name="width">How many sums a block has.</param>
    /// <param name="figures">How many figures there are.</param>
    /// <param name="compute">Computes the figures from sums over blocks; a figure that is not finite in a draw is left out of its quantiles.</param>
    public (double Low, double High)[] Intervals(IReadOnlyList<double[]> sums, int width, int figures, FiguresOfSums compute)
    {
        var intervals = new (double, double)[figures];
        Array.Fill(intervals, (double.NaN, double.NaN));
        if (blocks < 2) return intervals;

        var random = new SeededRandom(seed);
        var drawn = new double[figures][];
        for (int f = 0; f < figures; f++) drawn[f] = new double[resamples];
        double[] total = new double[width], values = new double[figures];
        var times = new int[blocks];
        for (int r = 0; r < resamples; r++)
        {
            Array.Clear(times);
            for (int b = 0; b < blocks; b++) times[random.Below(blocks)]++;
            Array.Clear(total);
            for (int b = 0; b < blocks; b++)
            {
                if (times[b] == 0) continue;
                var block = sums[b];
                for (int i = 0; i < total.Length; i++) total[i] += times[b] * block[i];
            }
            compute(total, values);
            for (int f = 0; f < figures; f++) drawn[f][r] = values[f];
        }

        double tail = TailShare();
        for (int f = 0; f < figures; f++)
        {
            var finite = Array.FindAll(drawn[f], double.IsFinite);
            if (finite.Length < resamples / 2) continue;
            Array.Sort(finite);
            intervals[f] = (Quantile(finite, tail), Quantile(finite, 1 - tail));
        }
        return intervals;
    }

    // The quantiles of the draws at which a normal figure has an interval of Student's t with the unbiased variance.
    private double TailShare()
    {
        double t = StudentT.InvCDF(0, 1, blocks - 1, (1 + level) / 2);
        return Normal.CDF(0, 1, -t * Math.Sqrt(blocks / (blocks - 1.0)));
    }

    private static double Quantile(double[] sorted, double share)
    {
        double place = share * (sorted.Length - 1);
        int below = (int)place;
        return below + 1 < sorted.Length ? sorted[below] + (place - below) * (sorted[below + 1] - sorted[below]) : sorted[^1];
    }
}
