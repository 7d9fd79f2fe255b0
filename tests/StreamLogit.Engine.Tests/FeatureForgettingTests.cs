using System.Globalization;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Tests.Features;
using static StreamLogit.Engine.Tests.RecordText;

namespace StreamLogit.Engine.Tests;

/// <summary>Features whose coefficients fade with a half-life of their own.</summary>
public sealed class FeatureForgettingTests
{
    private const double Second = 1_000_000;

    /// <summary>Few slots, so that values of features with different half-lives share some.</summary>
    private static readonly FeatureOptions[] Features =
    [
        new NumberFeature("x", NumberScale.None) { ForgetHalfLifeMicroseconds = 90_000_000 },
        new CategoryFeature(["c"]) { ForgetHalfLifeMicroseconds = 7_000_000 },
        new CategoryFeature(["d"]),
        new CategoryFeature(["c", "d"]) { ForgetHalfLifeMicroseconds = 1_500_000 },
    ];

    private static readonly EngineDefinition Few = Definitions.Of(Features) with { Learning = new LearningOptions { Slots = 16, Bank = [new SgdSetting(0.2, 0, 0)] } };

    private static readonly EngineDefinition Many = Few with
    {
        Learning = new LearningOptions
        {
            Slots = 1 << 10,
            Bank =
            [
                new SgdSetting(0.2, 0, 0), new AdagradSetting(0.1, 0), new SgdSetting(0.05, 0, 1e-3) { ForgetHalfLifeMicroseconds = 60_000_000 },
                new FtrlSetting(0.2, 1, 0.1, 0), new SgdSetting(1, 0, 0) { IsOvershootProof = true },
            ],
        },
        Labels = new LabelOptions { WaitMicroseconds = 300_000_000 },
    };

    [Fact]
    public void Process_LateLabels_EqualsAPlainModel()
    {
        var run = new EngineRun(Few);
        var encoded = new Encoded(Few);
        var plain = new PlainModel(encoded.Encoder.SlotCount, Features, 0.2);
        var awaiting = new Dictionary<string, (int[] Slots, double[] Values)>();
        int collisions = 0, late = 0;
        foreach (var (id, seconds, record, label, features) in Stream(4000))
        {
            run.Take(record);
            if (features is null) late++;
            else
            {
                awaiting[id] = encoded.Encode(features);
                var (slots, values) = awaiting[id];
                collisions += plain.Own(slots);
                double expected = plain.LogOdds(slots, values);
                Assert.True(Math.Abs(run.Scores[^1].LogOdds - expected) <= 1e-10, $"{id}: {run.Scores[^1].LogOdds} instead of {expected}");
            }
            if (label is { } y) plain.Learn(awaiting[id].Slots, awaiting[id].Values, y, seconds * Second);
        }
        Assert.Empty(run.Rejects);
        Assert.True(collisions > 500 && late > 500, $"{collisions} collisions, {late} late labels");

        // What is shown is what is left after the last label.
        var shown = run.Engine.Model().Settings[0].Coefficients.Select(c => c.Value);
        Assert.All(run.Engine.UsedSlots.Zip(shown), pair => Assert.Equal(plain.Coefficient(pair.First.Slot), pair.Second, 1e-10));
    }

    [Theory]
    [InlineData(1)]
    [InlineData(7)]
    [InlineData(4096)]
    public void Process_AnyBatchSize_GivesTheSameBits(int batchSize)
    {
        string[] records = [.. Stream(2000).Select(r => r.Record)];
        Assert.Equal(new EngineRun(Many).Take(records, 64).Scores.Select(s => (s.Id, s.LogOdds)), new EngineRun(Many).Take(records, batchSize).Scores.Select(s => (s.Id, s.LogOdds)));
    }

    [Fact]
    public void Process_ReasonsAndScans_ChangeNoBit()
    {
        string[] records = [.. Stream(1000).Select(r => r.Record)];
        var watched = new EngineRun(Many);
        var scan = new CoefficientScan(5);
        foreach (string record in records)
        {
            watched.Take(record);
            watched.Engine.Scan(scan, 10);
            watched.Engine.Model();
        }
        var quiet = new EngineRun(Many);
        quiet.Engine.GiveReasons = false;
        quiet.Take(records);
        Assert.Equal(quiet.Scores.Select(s => s.LogOdds), watched.Scores.Select(s => s.LogOdds));
    }

    [Fact]
    public void SaveAndLoad_AtAnyRecord_GoesOnToTheSameBits()
    {
        string[] records = [.. Stream(2000).Select(r => r.Record)];
        var whole = new EngineRun(Many).Take(records);
        var kept = new StateBlocks();
        var resumed = new EngineRun(Many);
        var scores = new List<double>();
        for (int i = 0; i < records.Length; i++)
        {
            resumed.Take(records[i]);
            if (i % 83 != 0) continue;
            resumed.Engine.Save(kept);
            var engine = new ScoringEngine(Many);
            engine.Load(kept);
            scores.AddRange(resumed.Scores.Select(s => s.LogOdds));
            resumed = new EngineRun(engine);
        }
        scores.AddRange(resumed.Scores.Select(s => s.LogOdds));
        Assert.Equal(whole.Scores.Select(s => s.LogOdds), scores);
        Assert.Equal(
            whole.Engine.Model().Settings.SelectMany(setting => setting.Coefficients), resumed.Engine.Model().Settings.SelectMany(setting => setting.Coefficients));
    }

    /// <summary>A definition may be given half-lives, other ones or none: the state goes on, with the owners of slots that it knows from before.</summary>
    [Fact]
    public void Load_ChangedForget_GoesOnFromThen()
    {
        var none = Many with { Features = [.. Features.Select(feature => feature with { ForgetHalfLifeMicroseconds = 0 })] };
        double seconds = 10_000;
        var run = new EngineRun(none).Take([.. Stream(1200).Select(r => r.Record)]).Take(Record("mark", seconds, 1, "c1", "d1", 1));
        var kept = new StateBlocks();
        foreach (var (definition, isFading) in new[] { (Many, true), (none, false), (Many, true) })
        {
            run.Engine.Save(kept);
            var before = Coefficients(run.Engine);
            var engine = new ScoringEngine(definition);
            engine.Load(kept);
            Assert.All(Coefficients(engine), c => Assert.Equal(before[c.Key], c.Value, 1e-15));

            // A label that teaches nothing moves the clock on by 7 seconds.
            seconds += 7;
            run = new EngineRun(engine).Take(Weighted(Record($"mark {seconds}", seconds, 0, "new", "new", 1), 0));
            var after = Coefficients(engine);
            Assert.NotEqual(0, before["c=c1"]);
            Assert.Equal(before["x"] * (isFading ? Math.Pow(2, -7.0 / 90) : 1), after["x"], 1e-14);
            Assert.Equal(before["c=c1"] * (isFading ? 0.5 : 1), after["c=c1"], 1e-14);
            Assert.Equal(before["d=d1"], after["d=d1"], 1e-15);
        }
    }

    private static Dictionary<string, double> Coefficients(ScoringEngine engine) =>
        engine.Model().Settings[0].Coefficients.ToDictionary(c => c.Feature, c => c.Value);

    [Fact]
    public void Process_WarmStart_PullsBackToTheWarmStart()
    {
        var cold = Definitions.Of(new NumberFeature("x", NumberScale.None) { ForgetHalfLifeMicroseconds = 10_000_000 }, new NumberFeature("y", NumberScale.None));
        var engine = new ScoringEngine(cold);
        new EngineRun(engine).Take(Record("first", 0, 1, "c", "d", null));
        var fitted = engine.ToFittedModel(0.3, slot => slot == cold.Learning.Slots ? 2 : -1);
        var run = new EngineRun(cold with { Learning = cold.Learning with { WarmStart = fitted } });
        double X() => Coefficients(run.Engine)["x"];

        run.Take(Record("a", 1, 5, "c", "d", 0));
        double moved = X() - 2;
        Assert.True(moved < -0.1);
        run.Take(Record("b", 31, 0, "c", "d", 1));
        Assert.Equal(moved / 8, X() - 2, 1e-14);
        run.Take(Record("c", 1000, 0, "c", "d", 1));
        Assert.Equal(2, X(), 1e-14);
    }

    /// <summary>
    /// The effects of one field turn round every so often, those of the other stay. With forget on that field the log-loss falls, and more than with forget on both,
    /// where what lasts fades too.
    /// </summary>
    [Fact]
    public void Process_OneFieldDrifts_ForgetOnThatFieldLowersTheLogLoss()
    {
        string[] records = [.. DriftingStream(20_000)];
        const long HalfLife = 100_000_000; // a period of the drifting field
        double never = Loss(0, 0), field = Loss(HalfLife, 0), others = Loss(0, HalfLife), all = Loss(HalfLife, HalfLife);
        string seen = string.Create(CultureInfo.InvariantCulture, $"never {never:F4}, the field {field:F4}, the other {others:F4}, both {all:F4}");
        TestContext.Current.TestOutputHelper?.WriteLine(seen);
        Assert.True(field < never - 0.01 && field < others - 0.01 && field < all, seen);

        double Loss(long ofTheField, long ofTheOthers)
        {
            var definition = Definitions.Of(
                new CategoryFeature(["c"]) { ForgetHalfLifeMicroseconds = ofTheField }, new CategoryFeature(["d"]) { ForgetHalfLifeMicroseconds = ofTheOthers });
            SettingOptions[] bank = [new SgdSetting(0.02, 0, 0), new SgdSetting(0.1, 0, 0), new SgdSetting(0.3, 0, 0), new AdagradSetting(0.1, 0), new AdagradSetting(0.3, 1000)];
            definition = definition with { Learning = new LearningOptions { Slots = 1 << 12, Bank = [.. bank] } };
            return new EngineRun(definition).Take(records, 1024).Engine.Health().Total.LogLoss;
        }
    }

    /// <summary>Events of which a third get their label later, after up to 40 seconds. Times are exact in binary.</summary>
    private static IEnumerable<(string Id, double Seconds, string Record, int? Label, string? Features)> Stream(int events)
    {
        var random = new Random(3);
        var late = new PriorityQueue<(string Id, int Label), double>();
        double seconds = 1000;
        for (int i = 0; i < events; i++)
        {
            seconds += i % 4 == 0 ? 0 : random.Next(i % 100 == 0 ? 480 : 8) / 8.0;
            while (late.TryPeek(out var waiting, out double due) && due <= seconds)
            {
                late.Dequeue();
                yield return (waiting.Id, due, Label(waiting.Id, due, waiting.Label), waiting.Label, null);
            }
            double x = Math.Round(random.NextDouble() * 2 - 1, 3);
            int c = random.Next(7), d = random.Next(5), label = random.NextDouble() < PlainModel.Sigmoid(2 * x + c % 3 - 1) ? 1 : 0;
            bool isLate = i % 3 == 0;
            if (isLate) late.Enqueue(($"e{i}", label), seconds + random.Next(1, 320) / 8.0);
            int? now = isLate ? null : label;
            yield return ($"e{i}", seconds, Record($"e{i}", seconds, x, $"c{c}", $"d{d}", now), now, Record($"e{i}", seconds, x, $"c{c}", $"d{d}", null));
        }
    }

    private static IEnumerable<string> DriftingStream(int events)
    {
        var random = new Random(4);
        double[] lasting = [.. Enumerable.Range(0, 300).Select(_ => random.NextDouble() * 4 - 2)], turning = new double[200];
        for (int i = 0; i < events; i++)
        {
            int c = random.Next(turning.Length), d = random.Next(lasting.Length);
            if (i % 2000 == 0)
                for (int value = 0; value < turning.Length; value++) turning[value] = random.Next(2) == 0 ? 2 : -2;
            int label = random.NextDouble() < PlainModel.Sigmoid(turning[c] + lasting[d]) ? 1 : 0;
            yield return Record($"e{i}", i * 0.05, 0, $"c{c}", $"d{d}", label);
        }
    }

    private static string Record(string id, double seconds, double x, string c, string d, int? label) => string.Create(
        CultureInfo.InvariantCulture, $"{{\"id\":\"{id}\",\"time\":{Time(seconds)},\"x\":{x},\"c\":\"{c}\",\"d\":\"{d}\"{(label is null ? "" : $",\"label\":{label}")}}}");

    /// <summary>Gradient descent of which every coefficient has its half-life: that of the feature that used its slot first.</summary>
    private sealed class PlainModel(int slots, FeatureOptions[] features, double step)
    {
        private readonly double[] _coefficients = new double[slots];
        private readonly double[] _halfLives = [.. Enumerable.Repeat(double.NaN, slots)];
        private double _intercept;
        private double _lastLabel = double.NaN;

        public static double Sigmoid(double z) => 1 / (1 + Math.Exp(-z));

        public double Coefficient(int slot) => _coefficients[slot];

        /// <returns>How many slots belong to another feature.</returns>
        public int Own(int[] entries)
        {
            int others = 0;
            for (int i = 0; i < entries.Length; i++)
            {
                double halfLife = features[i].ForgetHalfLifeMicroseconds;
                if (double.IsNaN(_halfLives[entries[i]])) _halfLives[entries[i]] = halfLife;
                else if (_halfLives[entries[i]] != halfLife) others++;
            }
            return others;
        }

        public double LogOdds(int[] entries, double[] values) => _intercept + entries.Zip(values, (slot, value) => _coefficients[slot] * value).Sum();

        public void Learn(int[] entries, double[] values, int y, double time)
        {
            double move = step * (y - Sigmoid(LogOdds(entries, values)));
            for (int slot = 0; slot < slots; slot++)
                if (_halfLives[slot] > 0 && time > _lastLabel) _coefficients[slot] *= Math.Pow(2, -(time - _lastLabel) / _halfLives[slot]);
            _lastLabel = Math.Max(time, double.IsNaN(_lastLabel) ? time : _lastLabel);
            _intercept += move;
            for (int i = 0; i < entries.Length; i++) _coefficients[entries[i]] += move * values[i];
        }
    }
}
