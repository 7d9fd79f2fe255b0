using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>
/// Compares variants with a reference, label by label, in memory that does not grow with the labels: per variant some 130 KB for the losses by day, up to
/// 0.4 MB for AUC and up to 8 KB for each slice. Deterministic.
/// </summary>
public sealed class VariantComparer
{
    private const int MostCells = 4096;
    private const int MostCellsOfASlice = 256;

    // Where there are fewer days than this, blocks are shorter than a day.
    private const int EnoughBlocks = 10;
    private readonly ImmutableArray<string> _names;
    private readonly ComparisonOptions _options;
    private readonly LossSums _losses;
    private readonly TimeCells _cells;
    private readonly RankSums? _ranks;
    private readonly BettingEvidence _evidence;
    private readonly List<(string Name, TimeCells Cells)> _slices = [];

    /// <param name="names">The reference, then the variants.</param>
    /// <param name="options">How they are compared.</param>
    /// <exception cref="ArgumentException">There is no reference, or an option is out of its range.</exception>
    public VariantComparer(ImmutableArray<string> names, ComparisonOptions options)
    {
        if (names.IsEmpty) throw new ArgumentException("there is no reference", nameof(names));
        if (!(options.Level > 0 && options.Level < 1)) throw new ArgumentException("the level is not above 0 and below 1", nameof(options));
        if (options.Resamples < 100) throw new ArgumentException("there are fewer than 100 resamples", nameof(options));
        (_names, _options) = (names, options);
        _losses = new LossSums(names.Length, options.Cost);
        _cells = new TimeCells(_losses.Width, MostCells);
        _ranks = options.CompareAuc ? new RankSums(names.Length) : null;
        _evidence = new BettingEvidence(names.Length - 1);
    }

    /// <summary>Makes room for a slice.</summary>
    /// <returns>Its number, for <see cref="Add"/>.</returns>
    public int AddSlice(string name)
    {
        _slices.Add((name, new TimeCells(_losses.Width, MostCellsOfASlice)));
        return _slices.Count - 1;
    }

    /// <summary>Takes in a label, in the order in which labels became known.</summary>
    /// <param name="logOdds">The log-odds that the reference and the variants gave, each finite.</param>
    /// <param name="label">0 or 1.</param>
    /// <param name="weight">0 or more and finite.</param>
    /// <param name="scoredAtMicroseconds">When the event was scored: its day counts.</param>
    /// <param name="knownAtMicroseconds">When the label became known.</param>
    /// <param name="slices">The slices to which the event belongs.</param>
    /// <exception cref="ArgumentException">A value is out of its range.</exception>
    public void Add(
        ReadOnlySpan<double> logOdds, int label, double weight, long scoredAtMicroseconds, long knownAtMicroseconds, ReadOnlySpan<int> slices)
    {
        if (!(weight >= 0 && double.IsFinite(weight))) throw new ArgumentException("a weight is negative or not finite", nameof(weight));
        if (weight == 0) return;
        AddToSums(logOdds, label, weight, scoredAtMicroseconds, slices);
        for (int v = 0; v < _names.Length - 1; v++)
        {
            var (gain, otherGain) = _losses.Gain(v, label);
            _evidence.Add(v, weight * gain, weight * otherGain, knownAtMicroseconds);
        }
    }

    /// <summary>
    /// Takes back a label that was taken in and turned out wrong, apart from its part in the evidence: a bet that is lost or won stays so. The right label
    /// is to be added then with <see cref="AddCorrection"/>.
    /// </summary>
    /// <param name="logOdds">The log-odds, as they were taken in.</param>
    /// <param name="label">The wrong label.</param>
    /// <param name="weight">The weight with which it was taken in.</param>
    /// <param name="scoredAtMicroseconds">When the event was scored.</param>
    /// <param name="slices">The slices to which the event belongs.</param>
    public void TakeBack(ReadOnlySpan<double> logOdds, int label, double weight, long scoredAtMicroseconds, ReadOnlySpan<int> slices) =>
        AddToSums(logOdds, label, -weight, scoredAtMicroseconds, slices);

    /// <summary>Takes in the right label in the place of a wrong one. It adds nothing to the evidence.</summary>
    /// <param name="logOdds">The log-odds.</param>
    /// <param name="label">The right label.</param>
    /// <param name="weight">Its weight.</param>
    /// <param name="scoredAtMicroseconds">When the event was scored.</param>
    /// <param name="slices">The slices to which the event belongs.</param>
    public void AddCorrection(ReadOnlySpan<double> logOdds, int label, double weight, long scoredAtMicroseconds, ReadOnlySpan<int> slices) =>
        AddToSums(logOdds, label, weight, scoredAtMicroseconds, slices);

    /// <summary>The comparison so far.</summary>
    public ComparisonResult Result()
    {
        var blocks = BlocksOf(_cells);
        var cells = blocks.InOrder();
        var total = LossSums.Total(cells.Select(c => c.Sums), _losses.Width);
        var losses = Differences(blocks, total);
        var (auc, aucIntervals) = _ranks?.Compare(blocks.CellMicroseconds, _options) ?? ([], []);
        return new ComparisonResult
        {
            Count = LossSums.Count(total),
            ObservedRate = LossSums.ObservedRate(total),
            ReferenceName = _names[0],
            Reference = FiguresOf(0),
            Variants =
            [
                .. losses.Select((difference, v) => new VariantComparison(
                    _names[v + 1], FiguresOf(v + 1), difference, AucOf(v), _evidence.Better(v), _evidence.Worse(v))),
            ],
            Days = [.. _cells.AtLeast(TimeCells.Day).InOrder().Select(day => PeriodOf(day.StartMicroseconds, day.Sums))],
            Slices = [.. _slices.Where(s => s.Cells.Count > 0).Select(s => SliceOf(s.Name, s.Cells))],
            Level = _options.Level,
            Blocks = cells.Length,
            BlockMicroseconds = blocks.CellMicroseconds,
        };

        ModelFigures FiguresOf(int model) => LossSums.Figures(total, model) with { Auc = _ranks is null ? double.NaN : auc[model] };

        Difference AucOf(int variant) => _ranks is null
            ? new Difference(double.NaN, double.NaN, double.NaN)
            : new Difference(auc[variant + 1] - auc[0], aucIntervals[variant].Low, aucIntervals[variant].High);
    }

    private void AddToSums(ReadOnlySpan<double> logOdds, int label, double weight, long scoredAtMicroseconds, ReadOnlySpan<int> slices)
    {
        if (logOdds.Length != _names.Length)
            throw new ArgumentException($"there are {logOdds.Length} log-odds for {_names.Length} models", nameof(logOdds));
        foreach (double value in logOdds)
            if (!double.IsFinite(value)) throw new ArgumentException("a log-odds is not finite", nameof(logOdds));
        if (label is not (0 or 1)) throw new ArgumentException("a label is not 0 or 1", nameof(label));
        if (weight == 0) return;

        _losses.Compute(logOdds, label, weight);
        _losses.AddTo(_cells.At(scoredAtMicroseconds));
        foreach (int slice in slices) _losses.AddTo(_slices[slice].Cells.At(scoredAtMicroseconds));
        _ranks?.Add(logOdds, label, weight, scoredAtMicroseconds);
    }

    private ComparisonPeriod PeriodOf(long start, double[] sums)
    {
        var differences = new double[_losses.DifferenceCount];
        LossSums.Differences(sums, differences);
        return new ComparisonPeriod(
            start, LossSums.Count(sums), LossSums.ObservedRate(sums), LossSums.Figures(sums, 0),
            [.. differences.Chunk(3).Select(d => new LossDifference(d[0], d[1], d[2]))]);
    }

    private SliceComparison SliceOf(string name, TimeCells cells)
    {
        var blocks = BlocksOf(cells);
        var total = LossSums.Total(blocks.InOrder().Select(c => c.Sums), _losses.Width);
        return new SliceComparison(
            name, LossSums.Count(total), LossSums.ObservedRate(total), LossSums.Figures(total, 0), [.. Differences(blocks, total)]);
    }

    private IEnumerable<VariantDifferences> Differences(TimeCells blocks, double[] total)
    {
        var values = new double[_losses.DifferenceCount];
        LossSums.Differences(total, values);
        var bootstrap = new BlockBootstrap(blocks.Count, _options.Resamples, _options.Level, _options.Seed);
        var intervals = bootstrap.Intervals(
            [.. blocks.InOrder().Select(c => c.Sums)], _losses.Width, values.Length, LossSums.Differences);
        return values.Zip(intervals, (value, interval) => new Difference(value, interval.Low, interval.High))
            .Chunk(3).Select(d => new VariantDifferences(d[0], d[1], d[2]));
    }

    // The longest blocks up to a day of which there are enough, so that what hangs together within a day stays together.
    private static TimeCells BlocksOf(TimeCells cells)
    {
        var blocks = cells;
        while (blocks.CellMicroseconds < TimeCells.Day)
        {
            var longer = blocks.AtLeast(TimeCells.Next(blocks.CellMicroseconds));
            if (longer.Count < EnoughBlocks) break;
            blocks = longer;
        }
        return blocks;
    }
}
