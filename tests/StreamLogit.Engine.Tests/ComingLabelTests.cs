using System.Globalization;
using System.Text.Json;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;
using static StreamLogit.Engine.Tests.RecordText;

namespace StreamLogit.Engine.Tests;

/// <summary>Labels that stand in their events and become known later.</summary>
public class ComingLabelTests
{
    private const long Second = 1_000_000;
    private const int Events = 3000;

    private static readonly JsonSerializerOptions Json = new()
    {
        NumberHandling = System.Text.Json.Serialization.JsonNumberHandling.AllowNamedFloatingPointLiterals,
    };

    private static EngineDefinition Definition(string? labelTime, UnlabelledEvents unlabelled = UnlabelledEvents.Drop, long waitSeconds = 600)
    {
        var plain = Definitions.Of(new NumberFeature("x", NumberScale.Standard), new TimeCycleFeature(3600 * Second, "1h"));
        return plain with
        {
            Record = plain.Record with { LabelTime = labelTime },
            Labels = new LabelOptions { WaitMicroseconds = waitSeconds * Second, Unlabelled = unlabelled, EarlyMicroseconds = 0 },
        };
    }

    // Events a second apart, with labels known after 0 to 700 seconds, so that some come when the wait of 600 is over; ties are frequent.
    private static (List<string> Within, List<string> Apart) Stream()
    {
        var random = new Random(11);
        List<string> within = [], apart = [];
        var due = new PriorityQueue<(string Id, int Label, int Known), (int, int)>();
        for (int i = 0; i < Events; i++)
        {
            while (due.TryPeek(out var next, out _) && next.Known <= i) apart.Add(Write(due.Dequeue()));
            double x = Math.Round(random.NextDouble() * 10 - 5, 3);
            apart.Add(Event($"e{i}", i, x));
            if (random.Next(5) == 0)
            {
                within.Add(Event($"e{i}", i, x));
                continue;
            }
            int label = random.NextDouble() < 1 / (1 + Math.Exp(-x)) ? 1 : 0;
            int known = i + random.Next(8) * random.Next(101);
            due.Enqueue(($"e{i}", label, known), (known, i));
            within.Add(Event($"e{i}", i, x, label)[..^1] + $",\"settled\":{Time(known)}}}");
            if (known == i) apart.Add(Write(due.Dequeue()));
        }
        while (due.TryDequeue(out var next, out _)) apart.Add(Write(next));
        return (within, apart);

        static string Write((string Id, int Label, int Known) label) => Label(label.Id, label.Known, label.Label);
    }

    private static string Text<T>(T snapshot) => JsonSerializer.Serialize(snapshot, Json);

    private static EngineRun End(EngineRun run)
    {
        run.Engine.End(new RecordBatch(run.Engine.Schema));
        return run;
    }

    [Theory]
    [InlineData(UnlabelledEvents.Drop, 600)]
    [InlineData(UnlabelledEvents.Negative, 600)]
    [InlineData(UnlabelledEvents.Drop, 3000)]
    public void Process_LabelTimesInEvents_GivesWhatLabelRecordsGive(UnlabelledEvents unlabelled, long waitSeconds)
    {
        var (within, apart) = Stream();
        var one = End(new EngineRun(Definition("settled", unlabelled, waitSeconds)).Take(within, 64));
        var two = End(new EngineRun(Definition(null, unlabelled, waitSeconds)).Take(apart, 100));

        Assert.Equal(Events, one.Scores.Count);
        Assert.Equal(two.Scores.Select(s => (s.Id, s.Probability, s.LogOdds, s.Version)), one.Scores.Select(s => (s.Id, s.Probability, s.LogOdds, s.Version)));
        Assert.Equal(Text(two.Engine.Model()), Text(one.Engine.Model()));
        var (oneHealth, twoHealth) = (one.Engine.Health(), two.Engine.Health());
        Assert.True(oneHealth.Labelled > 2000);
        Assert.Equal(0, oneHealth.TaughtAtOnce);
        Assert.Empty(one.Rejects);
        Assert.Equal(Text(twoHealth.Total), Text(oneHealth.Total));
        Assert.Equal((twoHealth.Labelled, twoHealth.Expired, twoHealth.Corrected, twoHealth.Awaiting), (oneHealth.Labelled, oneHealth.Expired, oneHealth.Corrected, oneHealth.Awaiting));
        // Label records that come too late are rejects; labels within events that are known too late are not records.
        if (waitSeconds == 3000) Assert.Equal(Text(twoHealth with { Records = 0, AwaitingBytes = 0 }), Text(oneHealth with { Records = 0, AwaitingBytes = 0 }));
    }

    [Fact]
    public void Save_WithLabelsToCome_GoesOnWithTheSameBits()
    {
        var (within, _) = Stream();
        var undisturbed = End(new EngineRun(Definition("settled")).Take(within, 64));
        var state = new StateBlocks();
        var pieces = new EngineRun(Definition("settled"));
        var scores = pieces.Scores.ToList();
        for (int start = 0; start < within.Count; start += 100)
        {
            pieces.Take(within.GetRange(start, 100), 64);
            scores.AddRange(pieces.Scores);
            var changes = new StateBlocks();
            pieces.Engine.Save(changes);
            foreach (var (part, number, bytes) in changes.Changes())
            {
                if (bytes is null) state.Remove(part, number);
                else state.Put(part, number, bytes);
            }
            pieces = new EngineRun(Definition("settled"));
            pieces.Engine.Load(state);
        }
        End(pieces);

        Assert.Equal(undisturbed.Scores.Select(s => (s.Id, s.Probability)), scores.Select(s => (s.Id, s.Probability)));
        Assert.Equal(Text(undisturbed.Engine.Model()), Text(pieces.Engine.Model()));
        Assert.Equal(Text(undisturbed.Engine.Health() with { AwaitingBytes = 0 }), Text(pieces.Engine.Health() with { AwaitingBytes = 0 }));
    }

    [Fact]
    public void Process_Delay_TeachesFromThenOn()
    {
        var definition = Definition(null);
        var run = new EngineRun(definition with { Labels = definition.Labels with { DelayMicroseconds = 10 * Second } }).Take(
            Event("a", 0, x: 1, label: 1), Event("b", 9.999, x: 1), Event("c", 10, x: 1), Event("d", 11, x: 1));

        Assert.Equal([0L, 0, 1, 1], run.Scores.Select(score => score.Version));
        Assert.Equal(0, run.Engine.Health().TaughtAtOnce);
        Assert.Equal(1, run.Engine.Health().Labelled);
    }

    [Fact]
    public void Process_LabelWithoutTime_TeachesAtOnceAndIsCounted()
    {
        var run = new EngineRun(Definition("settled")).Take(
            Event("a", 0, x: 1, label: 1), Event("b", 1, x: 1, label: 1)[..^1] + ",\"settled\":null}", Event("c", 2, x: 1));

        Assert.Equal([0L, 1, 2], run.Scores.Select(score => score.Version));
        Assert.Equal(2, run.Engine.Health().TaughtAtOnce);
    }

    [Fact]
    public void Process_LabelTimeUnreadable_IsAReject()
    {
        var run = new EngineRun(Definition("settled")).Take(Event("a", 0, x: 1, label: 1)[..^1] + ",\"settled\":\"soon\"}");

        Assert.Equal([(1L, RejectReason.TimeUnreadable)], run.Rejects);
    }

    [Fact]
    public void Keep_SomeRecords_LeavesTheirFieldsAndPlaces()
    {
        var definition = Definition(null);
        var batch = new RecordBatch(new RecordSchema(definition));
        for (int i = 0; i < 50; i++) batch.Add(System.Text.Encoding.UTF8.GetBytes(Event($"e{i}", i, x: i)), i + 1);
        new RecordDecoder(new RecordSchema(definition)).Decode(batch);
        batch.Keep(record => record.Position % 3 == 0);

        Assert.Equal(16, batch.Count);
        for (int i = 0; i < batch.Count; i++)
        {
            int number = 3 * (i + 1);
            Assert.Equal(number, batch.Records[i].Position);
            Assert.Equal(number - 1, batch.Fields(i)[0].Number);
            Assert.Equal($"e{number - 1}", System.Text.Encoding.UTF8.GetString(batch.Id(i)));
            Assert.Contains(string.Create(CultureInfo.InvariantCulture, $"\"e{number - 1}\""), System.Text.Encoding.UTF8.GetString(batch.RecordBytes(i)), StringComparison.Ordinal);
        }
    }
}
