using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Features.Histories;

/// <summary>Histories within the engine: labels by way of awaiting events, batches, saved states, allocation.</summary>
public class HistoryEngineTests
{
    private const long Hour = 3_600_000_000;

    private static readonly EngineDefinition Definition = Definitions.Of(
        new HistoryFeature(HistoryKind.Count, ["card"]) { HalfLifeMicroseconds = Hour, Span = "1h" },
        new HistoryFeature(HistoryKind.Mean, ["card"]) { Of = "amount", HalfLifeMicroseconds = 24 * Hour, Span = "1d", Scale = NumberScale.Rank },
        new HistoryFeature(HistoryKind.Gap, ["card"]),
        new HistoryFeature(HistoryKind.Distinct, ["card"]) { Of = "shop", HalfLifeMicroseconds = 24 * Hour, Span = "1d" },
        new HistoryFeature(HistoryKind.Rate, ["card"]) { HalfLifeMicroseconds = 24 * Hour, Span = "1d" },
        new HistoryFeature(HistoryKind.Rate, ["card", "shop"]) { HalfLifeMicroseconds = 24 * Hour, Span = "1d" },
        new NumberFeature("amount", NumberScale.Log1p)) with
    {
        Record = new RecordOptions { TimeFormat = TimeFormat.UnixMilliseconds },
        Histories = new HistoryOptions { MemoryBytes = 1 << 20 },
    };

    private static readonly string[] Stream = Records(seed: 21, cards: 9000, events: 12_000);

    [Theory]
    [InlineData(7)]
    [InlineData(4096)]
    public void Process_AnyBatchSize_GivesTheSameBits(int batchSize)
    {
        var one = new EngineRun(new ScoringEngine(Definition, new DictionaryArchive())).Take(Stream, batchSize: 1);
        var many = new EngineRun(new ScoringEngine(Definition, new DictionaryArchive())).Take(Stream, batchSize);
        Assert.Equal(one.Scores.Select(s => (s.Id, s.LogOdds)), many.Scores.Select(s => (s.Id, s.LogOdds)));
        Assert.Equal(one.Engine.Health().Histories, many.Engine.Health().Histories);
        Assert.True(one.Engine.Health().Histories.Misses > 500, one.Engine.Health().Histories.ToString());
    }

    [Fact]
    public void SaveAndLoad_ManyTimes_GivesTheSameBitsAndFigures()
    {
        var whole = new EngineRun(new ScoringEngine(Definition, new DictionaryArchive())).Take(Stream, batchSize: 100);
        var archive = new DictionaryArchive();
        var resumed = new EngineRun(new ScoringEngine(Definition, archive));
        var scores = new List<(string, double)>();
        for (int start = 0; start < Stream.Length; start += 1700)
        {
            resumed.Take(Stream[start..Math.Min(start + 1700, Stream.Length)], batchSize: 100);
            scores.AddRange(resumed.Scores.Select(s => (s.Id, s.LogOdds)));
            resumed.Engine.Save(archive.Blocks);
            var engine = new ScoringEngine(Definition, archive);
            engine.Load(archive.Blocks);
            resumed = new EngineRun(engine);
        }
        Assert.Equal(whole.Scores.Select(s => (s.Id, s.LogOdds)), scores);
        Assert.Equal(whole.Engine.Health().Histories, resumed.Engine.Health().Histories);
    }

    [Fact]
    public void Process_MuchOrLittleMemory_GivesTheSameBits()
    {
        var little = new EngineRun(new ScoringEngine(Definition, new DictionaryArchive())).Take(Stream, batchSize: 100);
        var all = new EngineRun(Definition).Take(Stream, batchSize: 100);
        Assert.Equal(all.Scores.Select(s => (s.Id, s.LogOdds)), little.Scores.Select(s => (s.Id, s.LogOdds)));
        Assert.Equal(0, all.Engine.Health().Histories.Evictions);
    }

    [Fact]
    public void Process_CorrectedLabel_CountsOnceWithItsFinalTruth()
    {
        var rate = new HistoryFeature(HistoryKind.Rate, ["card"]) { HalfLifeMicroseconds = Hour, Span = "1h", Scale = NumberScale.None };
        var definition = Definitions.Of(rate) with { Record = new RecordOptions { TimeFormat = TimeFormat.UnixMilliseconds } };
        var corrected = new EngineRun(definition).Take(
            """{"id":"a","time":1000,"card":"c"}""", """{"id":"a","time":2000,"label":1}""", """{"id":"a","time":3000,"label":0}""", """{"id":"b","time":3000,"card":"c"}""");
        var right = new EngineRun(definition).Take(
            """{"id":"a","time":1000,"card":"c"}""", """{"id":"a","time":3000,"label":0}""", """{"id":"b","time":3000,"card":"c"}""");
        // One good label, decayed by two seconds, against the 10 of the prior at a rate of (0 + 0.5) / (1 + 1).
        double expected = 10 * 0.25 / (10 + Math.Pow(2, -2.0 / 3600));
        Assert.Equal(expected, corrected.Scores[1].Reasons[0].Figure, 1e-12);
        Assert.Equal(expected, right.Scores[1].Reasons[0].Figure, 1e-12);
    }

    [Fact]
    public void Reasons_Histories_CarryTheFigureThatTheirWordsNeed()
    {
        var run = new EngineRun(Definitions.Of(new HistoryFeature(HistoryKind.Count, ["card"]) { HalfLifeMicroseconds = Hour, Span = "1h" }));
        for (int i = 0; i < 7; i++) run.Take($$"""{"id":"{{i}}","time":"2026-01-01T00:00:0{{i}}Z","card":"c"}""");
        var reason = run.Scores[^1].Reasons[0];
        Assert.Equal("card seen 6 times in the last hour", run.Engine.Definition.Features[reason.Feature].Words!.Of(reason.Figure));
    }

    [Fact]
    public void Process_HotKeys_AllocatesNothing()
    {
        var engine = new ScoringEngine(Definition with { Histories = new HistoryOptions() }, new DictionaryArchive());
        var decoder = new RecordDecoder(engine.Schema);
        var batch = new RecordBatch(engine.Schema);
        var scores = engine.CreateScoreBatch();
        string[] records = [.. Enumerable.Range(0, 2000).Select(i => $$"""{"id":"e{{i}}","time":{{1_767_225_600_000 + i}},"card":"c{{i % 300}}","shop":"s{{i % 7}}","amount":{{i % 90}},"label":{{i % 2}}}""")];
        long allocated = long.MaxValue;
        for (int round = 0; round < 30; round++)
        {
            batch.Clear();
            scores.Clear();
            for (int i = 0; i < records.Length; i++) batch.Add(Encoding.UTF8.GetBytes(records[i]), i + 1);
            decoder.Decode(batch);
            long before = GC.GetAllocatedBytesForCurrentThread();
            engine.Process(batch, scores);
            if (round >= 20) allocated = Math.Min(allocated, GC.GetAllocatedBytesForCurrentThread() - before);
        }
        Assert.Equal(0, allocated);
    }

    private static string[] Records(int seed, int cards, int events)
    {
        var ids = new Dictionary<PastEvent, int>(ReferenceEqualityComparer.Instance);
        return [.. RandomStream.Steps(seed, cards, events).Select(step =>
        {
            if (!ids.TryGetValue(step.Event, out int id)) ids[step.Event] = id = ids.Count;
            return step.Label is { } label
                ? $$"""{"id":"{{id}}","time":{{step.Event.Time / 1000}},"label":{{label}}}"""
                : step.Event.Json().Replace("\"id\":\"1\"", $"\"id\":\"{id}\"", StringComparison.Ordinal);
        })];
    }
}
