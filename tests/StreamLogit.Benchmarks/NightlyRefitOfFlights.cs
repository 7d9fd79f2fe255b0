using System.Diagnostics;
using System.Globalization;
using StreamLogit.Engine;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Fitting;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Records;

namespace StreamLogit.Benchmarks;

/// <summary>
/// The nightly refit on the recording that tests/flights/prepare.sh makes, with the features of the reference run: one-hot origin, destination,
/// hour and weekday, and ln(1 + miles) / 3 - 2.
/// </summary>
/// <remarks>
/// Twice: as the reference, for which every label is known at the midnight after its event and the first day does not count; and with the labels known
/// when the recording says so. The mean log-loss of the reference (scikit-learn 1.2.1, C = 1) on 3, 7 and 30 trailing days: 0.498443, 0.502523, 0.492092.
/// </remarks>
internal sealed class NightlyRefitOfFlights
{
    private const int BatchRecords = 4096;
    private const int NoLabelIsLaterDays = 2;
    private readonly NightlyRefit _reference;
    private readonly NightlyRefit _honest;
    private readonly SortedDictionary<long, List<(int[] Slots, double[] Values, int Label)>> _unfinished = [];
    private readonly ScoringEngine _engine;
    private double _referenceLoss, _honestLoss;
    private long _referenceCount, _honestCount;

    private NightlyRefitOfFlights(int days)
    {
        var definition = new EngineDefinition
        {
            Stream = "flights",
            Record = new RecordOptions(),
            Features =
            [
                new CategoryFeature(["origin"]), new CategoryFeature(["destination"]), new CategoryFeature(["hour"]), new CategoryFeature(["weekday"]),
                new NumberFeature("logDistance", NumberScale.None),
            ],
            Learning = new LearningOptions { Slots = 1 << 18, Bank = [new SgdSetting(0.01, 0, 0)] },
        };
        _reference = new NightlyRefit(new NightlyRefitOptions { TrailingDays = days });
        _honest = new NightlyRefit(new NightlyRefitOptions { TrailingDays = days });
        _engine = new ScoringEngine(definition) { GiveReasons = false, Labelled = Take };
    }

    /// <summary>Prints the mean log-loss of both.</summary>
    public static int Print(string path, int days)
    {
        var run = new NightlyRefitOfFlights(days);
        var watch = Stopwatch.StartNew();
        run.Read(path);
        foreach (long day in run._unfinished.Keys.ToList()) run.Finish(day);
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"trailing days {days}"));
        Console.WriteLine(string.Create(
            CultureInfo.InvariantCulture,
            $"labels known at midnight: log-loss {run._referenceLoss / run._referenceCount:F6} over {run._referenceCount} events, {run._reference.Fits} fits, {run._reference.Passes} passes"));
        Console.WriteLine(string.Create(
            CultureInfo.InvariantCulture,
            $"labels known as recorded: log-loss {run._honestLoss / run._honestCount:F6} over {run._honestCount} events, {run._honest.Fits} fits, {run._honest.Passes} passes"));
        Console.WriteLine(string.Create(
            CultureInfo.InvariantCulture, $"{watch.Elapsed.TotalSeconds:F0} s, largest working set {Process.GetCurrentProcess().PeakWorkingSet64 >> 20} MiB"));
        return 0;
    }

    private void Read(string path)
    {
        var decoder = new RecordDecoder(_engine.Schema);
        var batch = new RecordBatch(_engine.Schema);
        var scores = _engine.CreateScoreBatch();
        long line = 0;
        foreach (var lines in File.ReadLines(path).Chunk(BatchRecords))
        {
            batch.Clear();
            scores.Clear();
            foreach (string text in lines) batch.Add(System.Text.Encoding.UTF8.GetBytes(text), ++line);
            decoder.Decode(batch);
            _engine.Process(batch, scores);
        }
    }

    private void Take(in LabelledEvent labelled)
    {
        var x = labelled.Vector;
        long day = NightlyRefit.DayOf(labelled.ScoredAtMicroseconds), today = NightlyRefit.DayOf(labelled.KnownAtMicroseconds);

        _honest.GoTo(today);
        Count(_honest.LogOdds(in x, day), labelled.Label, ref _honestLoss, ref _honestCount);
        _honest.Learn(in x, labelled.Label, labelled.Weight, day);

        foreach (long old in _unfinished.Keys.TakeWhile(d => d <= today - NoLabelIsLaterDays).ToList()) Finish(old);
        if (!_unfinished.TryGetValue(day, out var rows)) _unfinished.Add(day, rows = []);
        rows.Add((x.Slots.ToArray(), x.Values.ToArray(), labelled.Label));
    }

    private void Finish(long day)
    {
        _reference.GoTo(day);
        foreach (var (slots, values, label) in _unfinished[day])
        {
            var x = new EncodedVector(slots, values);
            Count(_reference.LogOdds(in x, day), label, ref _referenceLoss, ref _referenceCount);
            _reference.Learn(in x, label, 1, day);
        }
        _unfinished.Remove(day);
    }

    private static void Count(double logOdds, int label, ref double loss, ref long count)
    {
        if (double.IsNaN(logOdds)) return;
        loss += Elementary.Softplus(label == 1 ? -logOdds : logOdds);
        count++;
    }
}
