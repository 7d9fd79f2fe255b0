using System.Diagnostics;
using System.Globalization;
using System.Text;
using StreamLogit.Engine;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>What histories over a million keys in memory add to the time of the engine, and whether they allocate. Records are decoded outside of what is timed.</summary>
internal static class HistoryRatios
{
    private const int Keys = 1_000_000;
    private const int BatchRecords = 4096;
    private const long Hour = 3_600_000_000;

    private static readonly FeatureOptions[] Plain =
    [
        new NumberFeature("price", NumberScale.Log1p), new NumberFeature("passengers", NumberScale.None),
        new CategoryFeature(["country"]), new CategoryFeature(["channel"]), new CategoryFeature(["route"]), new CategoryFeature(["vehicle"]),
        new CategoryFeature(["gift"]), new CategoryFeature(["country", "channel"]), new TimeCycleFeature(24 * Hour, "1d"),
    ];

    private static readonly FeatureOptions[] Histories =
    [
        new HistoryFeature(HistoryKind.Count, ["card"]) { HalfLifeMicroseconds = Hour, Span = "1h" },
        new HistoryFeature(HistoryKind.Mean, ["card"]) { Of = "price", HalfLifeMicroseconds = 24 * Hour, Span = "1d" },
        new HistoryFeature(HistoryKind.Gap, ["card"]),
        new HistoryFeature(HistoryKind.Rate, ["card"]) { HalfLifeMicroseconds = 30 * 24 * Hour, Span = "30d" },
    ];

    /// <summary>The time of the engine with four histories over that without, when every key has been seen.</summary>
    public static double FourAgainstNone()
    {
        var plain = new TimedEngine(Plain);
        var withHistories = new TimedEngine([.. Plain, .. Histories]);
        for (int first = 0; first < 2 * Keys; first += BatchRecords)
        {
            var lines = Lines(first);
            plain.Run(lines, isTimed: first >= Keys);
            withHistories.Run(lines, isTimed: first >= Keys);
        }
        return withHistories.Seconds / plain.Seconds;
    }

    /// <summary>What an event allocates when its key is in memory. Without health, whose rings are still growing to what they keep.</summary>
    public static double AllocatedBytesPerEvent()
    {
        var engine = new TimedEngine([.. Plain, .. Histories], countsHealth: false);
        for (int first = 0; first < 2 * Keys; first += BatchRecords) engine.Run(Lines(first), isTimed: first >= Keys);
        return engine.AllocatedBytes / (double)Keys;
    }

    // Multiplied by a number without a factor in common with it, the keys come in no order, and each comes once in a million events.
    private static byte[][] Lines(int first) =>
    [
        .. Enumerable.Range(first, BatchRecords).Select(i => Encoding.UTF8.GetBytes(string.Create(
            CultureInfo.InvariantCulture,
            $$"""{"id":"t-{{i}}","time":{{1_772_000_000_000 + i * 20L}},"card":"c-{{i * 7_654_321L % Keys}}","country":"Q{{i % 7}}","channel":"{{(i % 3 == 0 ? "app" : "web")}}","route":"r{{i % 11}}","vehicle":"v{{i % 5}}","gift":{{(i % 13 == 0 ? "true" : "false")}},"passengers":{{i % 6}},"price":{{i % 97}}.5,"label":{{(i % 100 == 0 ? 1 : 0)}}}"""))),
    ];

    private sealed class TimedEngine
    {
        private readonly ScoringEngine _engine;
        private readonly RecordDecoder _decoder;
        private readonly RecordBatch _batch;
        private readonly ScoreBatch _scores;
        private long _ticks;

        public TimedEngine(FeatureOptions[] features, bool countsHealth = true)
        {
            _engine = new ScoringEngine(new EngineDefinition
            {
                Stream = "histories",
                Record = new RecordOptions { TimeFormat = TimeFormat.UnixMilliseconds },
                Features = [.. features],
                Learning = new LearningOptions { Bank = [new SgdSetting(0.01, 0, 1e-6)], Slots = 4096 },
            }) { GiveReasons = false, CountsHealth = countsHealth };
            _decoder = new RecordDecoder(_engine.Schema);
            _batch = new RecordBatch(_engine.Schema);
            _scores = _engine.CreateScoreBatch();
        }

        public double Seconds => (double)_ticks / Stopwatch.Frequency;

        public long AllocatedBytes { get; private set; }

        public void Run(byte[][] lines, bool isTimed)
        {
            _batch.Clear();
            _scores.Clear();
            for (int i = 0; i < lines.Length; i++) _batch.Add(lines[i], i + 1);
            _decoder.Decode(_batch);
            long before = GC.GetAllocatedBytesForCurrentThread(), start = Stopwatch.GetTimestamp();
            _engine.Process(_batch, _scores);
            if (_batch.Rejects.Count > 0) throw new InvalidOperationException("a record was rejected");
            if (!isTimed) return;
            _ticks += Stopwatch.GetTimestamp() - start;
            AllocatedBytes += GC.GetAllocatedBytesForCurrentThread() - before;
        }
    }
}
