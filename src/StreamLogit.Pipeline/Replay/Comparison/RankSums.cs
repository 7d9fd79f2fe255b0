namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>
/// Counts of the log-odds of ones and of zeros in bins, by cells of time, for the AUC of every model and its interval. What a block of time adds to an AUC
/// is taken by its influence (DeLong, DeLong &amp; Clarke-Pearson, Biometrics 44, 1988, 837), so that a draw of blocks needs no ranking of its own.
/// The bins are 0.05 of log-odds wide; what is lost by that is of the order of 1e-4, mostly the same for all models.
/// </summary>
internal sealed class RankSums(int models)
{
    private const int Bins = 512;
    private const double BinsPerUnit = 20;
    private const int MostCells = 48;

    // Sums of a block for a model: the influence of its ones, their weight, the influence of its zeros, their weight.
    private const int PerModel = 4;
    private readonly TimeCells _cells = new(2 * Bins * models, MostCells);

    public void Add(ReadOnlySpan<double> logOdds, int label, double weight, long timeMicroseconds)
    {
        var counts = _cells.At(timeMicroseconds);
        for (int m = 0; m < models; m++) counts[(2 * m + label) * Bins + BinOf(logOdds[m])] += weight;
    }

    /// <summary>The AUC of every model, and the intervals of the variants' differences from the reference.</summary>
    public (double[] Auc, (double Low, double High)[] Intervals) Compare(long blockMicroseconds, ComparisonOptions options)
    {
        var blocks = _cells.AtLeast(blockMicroseconds).InOrder().Select(c => c.Sums).ToArray();
        var total = LossSums.Total(blocks, 2 * Bins * models);
        var auc = new double[models];
        var sums = blocks.Select(_ => new double[PerModel * models]).ToArray();
        for (int m = 0; m < models; m++)
        {
            var zeros = total.AsSpan(2 * m * Bins, Bins);
            var ones = total.AsSpan((2 * m + 1) * Bins, Bins);
            double[] zerosBelow = SharesBelow(zeros), onesAbove = SharesBelow(ones);
            for (int bin = 0; bin < Bins; bin++)
            {
                onesAbove[bin] = 1 - onesAbove[bin];
                auc[m] += ones[bin] * zerosBelow[bin];
            }
            auc[m] /= Sum(ones);
            for (int b = 0; b < blocks.Length; b++)
                for (int bin = 0; bin < Bins; bin++)
                {
                    double zero = blocks[b][2 * m * Bins + bin], one = blocks[b][(2 * m + 1) * Bins + bin];
                    sums[b][PerModel * m] += one * zerosBelow[bin];
                    sums[b][PerModel * m + 1] += one;
                    sums[b][PerModel * m + 2] += zero * onesAbove[bin];
                    sums[b][PerModel * m + 3] += zero;
                }
        }
        var bootstrap = new BlockBootstrap(blocks.Length, options.Resamples, options.Level, options.Seed);
        var intervals = bootstrap.Intervals(sums, PerModel * models, models - 1, (drawn, differences) =>
        {
            double reference = Drawn(drawn, 0, auc);
            for (int v = 0; v < differences.Length; v++) differences[v] = Drawn(drawn, v + 1, auc) - reference;
        });
        return (auc, intervals);
    }

    // AUC plus the mean influence of the ones and of the zeros drawn, each less the AUC.
    private static double Drawn(ReadOnlySpan<double> sums, int model, double[] auc)
    {
        var of = sums.Slice(PerModel * model, PerModel);
        return of[0] / of[1] + of[2] / of[3] - auc[model];
    }

    // The share of the weight below each bin, half of the bin's own counted with it.
    private static double[] SharesBelow(ReadOnlySpan<double> weights)
    {
        var shares = new double[weights.Length];
        double total = Sum(weights), below = 0;
        for (int bin = 0; bin < weights.Length; bin++)
        {
            shares[bin] = (below + 0.5 * weights[bin]) / total;
            below += weights[bin];
        }
        return shares;
    }

    private static double Sum(ReadOnlySpan<double> weights)
    {
        double sum = 0;
        foreach (double weight in weights) sum += weight;
        return sum;
    }

    private static int BinOf(double logOdds) => (int)Math.Clamp(Math.Floor(logOdds * BinsPerUnit) + Bins / 2, 0, Bins - 1);
}
