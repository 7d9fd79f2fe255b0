using System.Globalization;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;
using static StreamLogit.Engine.Tests.RecordText;

namespace StreamLogit.Engine.Tests;

public class ScoringEngineTests
{
    private static readonly NumberFeature X = new("x", NumberScale.None);

    [Fact]
    public void Process_EventWithLabel_IsScoredBeforeItIsLearned()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 2, label: 1), Event("b", 1, x: 2, label: 1));
        Assert.Equal(0.5, run.Scores[0].Probability);
        // One step of 0.1 (1 - 0.5) on x = 2 and on the intercept: 2 * 0.1 + 0.05.
        Assert.Equal(0.25, run.Scores[1].LogOdds, 1e-15);
        Assert.Equal([0L, 1L], run.Scores.Select(s => s.Version));
    }

    [Fact]
    public void Process_IdAwaitingItsLabel_IsNotTakenAgain()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 1), Event("a", 1, x: 2));
        Assert.Equal(RejectReason.IdReused, Assert.Single(run.Rejects).Reason);
        Assert.Single(run.Scores);
    }

    [Fact]
    public void Process_WeightOfTheLabel_GoesBeforeTheWeightOfTheEvent()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(
            Weighted(Event("a", 0, x: 0), 3), Weighted(Event("b", 1, x: 0), 3), Label("a", 2, 1), Weighted(Label("b", 3, 1), 2));
        Assert.Equal(5, run.Engine.Health().Total.Weight);
    }

    [Fact]
    public void Process_ScoresOfLabelledEventsUnwanted_PublishesTheOthersOnly()
    {
        var definition = Definitions.Of(X) with { Decision = new DecisionOptions { PublishLabelled = false } };
        var run = new EngineRun(definition).Take(Event("a", 0, x: 1, label: 1), Event("b", 1, x: 1));
        Assert.Equal("b", Assert.Single(run.Scores).Id);
        Assert.Equal(2, run.Engine.Health().Events);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(7)]
    [InlineData(4096)]
    public void Process_AnyBatchSize_GivesTheSameBits(int batchSize)
    {
        var records = Stream(3000);
        var expected = new EngineRun(Rich()).Take(records, 64).Scores.Select(s => (s.Id, BitConverter.DoubleToInt64Bits(s.LogOdds)));
        var got = new EngineRun(Rich()).Take(records, batchSize).Scores.Select(s => (s.Id, BitConverter.DoubleToInt64Bits(s.LogOdds)));
        Assert.Equal(expected, got);
    }

    [Fact]
    public void SaveAndLoad_AtAnyRecord_GoesOnToTheSameBits()
    {
        var records = Stream(2000);
        var whole = new EngineRun(Rich()).Take(records);
        var kept = new StateBlocks();
        var resumed = new EngineRun(Rich());
        var scores = new List<double>();
        for (int i = 0; i < records.Length; i++)
        {
            resumed.Take(records[i]);
            if (i % 97 != 0) continue;
            resumed.Engine.Save(kept);
            var engine = new ScoringEngine(Rich());
            engine.Load(kept);
            scores.AddRange(resumed.Scores.Select(s => s.LogOdds));
            resumed = new EngineRun(engine);
        }
        scores.AddRange(resumed.Scores.Select(s => s.LogOdds));
        Assert.Equal(whole.Scores.Select(s => s.LogOdds), scores);
        Assert.Equal(whole.Engine.Health().Total, resumed.Engine.Health().Total);
        Assert.Equal(whole.Engine.Health().Settings, resumed.Engine.Health().Settings);
        Assert.Equal(whole.Engine.Health().Windows, resumed.Engine.Health().Windows);
    }

    [Fact]
    public void Load_OtherFeatures_IsRefused()
    {
        var kept = new StateBlocks();
        new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 1)).Engine.Save(kept);
        var other = new ScoringEngine(Definitions.Of(new NumberFeature("y", NumberScale.None)));
        Assert.Contains("other features", Assert.Throws<InvalidStateException>(() => other.Load(kept)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Process_ReasonsOnOrOff_ChangeNoScore()
    {
        var records = Stream(500);
        var with = new EngineRun(Rich()).Take(records);
        var without = new EngineRun(Rich());
        without.Engine.GiveReasons = false;
        without.Take(records);
        Assert.Equal(with.Scores.Select(s => s.LogOdds), without.Scores.Select(s => s.LogOdds));
        Assert.All(with.Scores, s => Assert.Equal(3, s.Reasons.Length));
        Assert.All(without.Scores, s => Assert.Empty(s.Reasons));
    }

    [Fact]
    public void Process_SteadyState_AllocatesNothing()
    {
        var engine = new ScoringEngine(Rich());
        var decoder = new RecordDecoder(engine.Schema);
        var scores = engine.CreateScoreBatch();
        var batch = new RecordBatch(engine.Schema);
        var rounds = Stream(24_000).Select(System.Text.Encoding.UTF8.GetBytes).Chunk(5_000).ToArray();
        long least = long.MaxValue;
        for (int round = 0; round < rounds.Length; round++)
        {
            batch.Clear();
            scores.Clear();
            foreach (byte[] record in rounds[round]) batch.Add(record, 1);
            long before = GC.GetAllocatedBytesForCurrentThread();
            decoder.Decode(batch);
            engine.Process(batch, scores);
            // The first rounds grow the batches, and the runtime may allocate once when it replaces code by better code.
            if (round >= 3) least = Math.Min(least, GC.GetAllocatedBytesForCurrentThread() - before);
        }
        Assert.Equal(0, engine.Health().Rejected);
        Assert.Equal(0, least);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(37)]
    [InlineData(int.MaxValue)]
    public void Scan_InPiecesOfAnySize_FindsTheLargestCoefficientsOfTheBlend(int slots)
    {
        var engine = new EngineRun(Rich()).Take(Stream(3000)).Engine;
        var model = engine.Model();
        var expected = model.Settings[0].Coefficients
            .Select((c, i) => (c.Feature, Value: model.Settings.Select((setting, s) => model.Blend[s].Weight * setting.Coefficients[i].Value).Sum()))
            .OrderByDescending(c => Math.Abs(c.Value)).Take(12).ToList();
        var scan = new CoefficientScan(12);

        for (int round = 0; round < 2; round++)
        {
            LargestCoefficients? found;
            do found = engine.Scan(scan, slots);
            while (found is null);

            Assert.Equal((model.Version, model.Settings[0].Coefficients.Length), (found.Version, found.Used));
            Assert.Equal(model.Settings.Select((setting, s) => model.Blend[s].Weight * setting.Intercept).Sum(), found.Intercept, 1e-12);
            Assert.Equal(expected.Select(c => c.Feature), found.Coefficients.Select(c => c.Feature));
            Assert.All(found.Coefficients.Zip(expected), pair => Assert.Equal(pair.Second.Value, pair.First.Value, 1e-12));
        }
    }

    private static EngineDefinition Rich() => Definitions.Of(
        X, new NumberFeature("y", NumberScale.Standard), new CategoryFeature(["c"]), new CategoryFeature(["c", "d"]), new TimeCycleFeature(3600_000_000, "1h"))
        with
    {
        Learning = new LearningOptions
        {
            Slots = 1 << 10,
            Bank = [new SgdSetting(0.01, 0, 0), new SgdSetting(0.1, 0.3, 1e-4), new SgdSetting(0.5, 0.5, 0)],
        },
        Labels = new LabelOptions { WaitMicroseconds = 300_000_000 },
    };

    /// <summary>Events with their label, events whose label comes later or never, from a small fixed generator.</summary>
    private static string[] Stream(int events)
    {
        var records = new List<string>();
        ulong state = 42;
        for (int i = 0; i < events; i++)
        {
            double x = Next() * 2 - 1, y = Next() * 100;
            int label = Next() < 1 / (1 + Math.Exp(1 - 3 * x)) ? 1 : 0;
            int kind = (int)(Next() * 4);
            string record = string.Create(CultureInfo.InvariantCulture, $"{{\"id\":\"e{i}\",\"time\":{Time(i)},\"x\":{x:F4},\"y\":{y:F2},\"c\":\"c{i % 7}\",\"d\":\"d{i % 5}\"}}");
            records.Add(kind == 0 ? record : record[..^1] + $",\"label\":{label}}}");
            if (kind == 0 && i % 3 != 0) records.Add($"{{\"id\":\"e{i}\",\"time\":{Time(i + 0.5)},\"label\":{label}}}");
        }
        return [.. records];

        double Next()
        {
            state = state * 6364136223846793005 + 1442695040888963407;
            return (state >> 11) * (1.0 / (1ul << 53));
        }
    }
}
