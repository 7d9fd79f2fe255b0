using StreamLogit.Engine.Definition;
using static StreamLogit.Engine.Tests.RecordText;

namespace StreamLogit.Engine.Tests;

/// <summary>Random interleavings of events, labels, repetitions, corrections, reused ids, restarts and kills, against a dictionary that keeps everything.</summary>
public class LateLabelModelTests
{
    private const int WaitSeconds = 50;
    private const int EarlySeconds = 10;

    [Theory]
    [InlineData(UnlabelledEvents.Drop, false)]
    [InlineData(UnlabelledEvents.Drop, true)]
    [InlineData(UnlabelledEvents.Negative, false)]
    [InlineData(UnlabelledEvents.Negative, true)]
    public void AnyInterleaving_WithRestartsAndKills_AgreesWithADictionary(UnlabelledEvents unlabelled, bool isArchived)
    {
        var definition = Definitions.Of(new NumberFeature("x", NumberScale.None)) with
        {
            Labels = new LabelOptions
            {
                WaitMicroseconds = WaitSeconds * 1_000_000L, EarlyMicroseconds = EarlySeconds * 1_000_000L, Unlabelled = unlabelled, MemoryBytes = 1,
            },
        };
        for (int seed = 0; seed < 40; seed++)
        {
            var random = new Random(seed);
            var oracle = new Oracle(unlabelled == UnlabelledEvents.Negative);
            var undisturbed = new EngineRun(definition);
            var records = new List<string>();
            for (int second = 0; records.Count < 400; second += random.Next(3))
            {
                string id = $"e{random.Next(second / 4, second / 4 + 30)}{new string('-', isArchived ? 3000 : 0)}";
                int label = random.Next(2);
                bool isEvent = random.Next(2) == 0;
                records.Add(isEvent ? Event(id, second, random.Next(5)) : Label(id, second, label));
                oracle.Take(id, second, isEvent ? null : label);
            }

            undisturbed.Take([.. records]);
            AssertAgrees(oracle, undisturbed.Engine);
            AssertSame(undisturbed, Disturbed(definition, records, random, isArchived), seed);
        }
    }

    /// <summary>The same records with saves and deaths in between: after a death, the engine goes on from the last save.</summary>
    private static EngineRun Disturbed(EngineDefinition definition, List<string> records, Random random, bool isArchived)
    {
        // What a death leaves is what was saved; what the engine put into the archive since then belongs to the next save.
        var saved = new DictionaryArchive();
        var archive = isArchived ? new DictionaryArchive(saved) : null;
        var run = new EngineRun(new ScoringEngine(definition, archive));
        run.Engine.Save(saved.Blocks);
        int savedAt = 0;
        for (int i = 0; i < records.Count; i++)
        {
            run.Take(records[i]);
            int chance = random.Next(40);
            if (chance == 0)
            {
                archive?.MoveTo(saved);
                run.Engine.Save(saved.Blocks);
                savedAt = i + 1;
            }
            if (chance != 1) continue;
            archive = isArchived ? new DictionaryArchive(saved) : null;
            run = new EngineRun(new ScoringEngine(definition, archive));
            run.Engine.Load(saved.Blocks);
            i = savedAt - 1;
        }
        return run;
    }

    private static void AssertAgrees(Oracle oracle, ScoringEngine engine)
    {
        var health = engine.Health();
        Assert.Equal(oracle.Labelled, health.Labelled);
        Assert.Equal(oracle.Awaiting, health.Awaiting);
        Assert.Equal(oracle.Early.Count, health.Early);
        Assert.Equal((oracle.Expired, oracle.Repeated, oracle.Corrected), (health.Expired, health.Repeated, health.Corrected));
        Assert.Equal(oracle.Reused, health.RejectsByReason.GetValueOrDefault("id-reused"));
        Assert.Equal(oracle.Unknown, health.RejectsByReason.GetValueOrDefault("label-unknown-event"));
        if (oracle.Labelled > 0) Assert.Equal(oracle.Bad / (double)oracle.Labelled, health.Total.ObservedRate, 1e-12);
        Assert.Equal(oracle.Labelled + oracle.Corrected, engine.Model().Version);
    }

    private static void AssertSame(EngineRun expected, EngineRun got, int seed)
    {
        var (a, b) = (expected.Engine.Health(), got.Engine.Health());
        Assert.True(a.Total == b.Total, $"seed {seed}");
        Assert.Equal((a.Awaiting, a.Early, a.Expired, a.Repeated, a.Corrected, a.Rejected), (b.Awaiting, b.Early, b.Expired, b.Repeated, b.Corrected, b.Rejected));
        Assert.Equal(expected.Engine.Model().Settings[0].Intercept, got.Engine.Model().Settings[0].Intercept);
    }

    private sealed class Oracle(bool assumesGood)
    {
        private readonly Dictionary<string, (int ScoredAt, int? Label, bool IsAssumed)> _events = [];
        private int _clock;

        public List<(string Id, int Label, int CameAt)> Early { get; } = [];

        public int Expired, Repeated, Corrected, Reused, Unknown, Labelled, Bad;

        public int Awaiting => _events.Values.Count(e => e.Label is null);

        public void Take(string id, int second, int? label)
        {
            _clock = Math.Max(_clock, second);
            foreach (var (old, e) in _events.Where(e => e.Value.Label is null && _clock - e.Value.ScoredAt > WaitSeconds).ToList())
            {
                Expired++;
                _events[old] = e with { Label = 0, IsAssumed = true };
                if (assumesGood) Labelled++;
            }
            foreach (var (old, _) in _events.Where(e => _clock - e.Value.ScoredAt > (assumesGood ? 2 : 1) * WaitSeconds).ToList()) _events.Remove(old);
            Unknown += Early.RemoveAll(e => _clock - e.CameAt > EarlySeconds);

            if (label is int known) Learn(id, known);
            else if (_events.ContainsKey(id)) Reused++;
            else
            {
                _events[id] = (_clock, null, false);
                foreach (var early in Early.Where(e => e.Id == id).ToList()) Learn(id, early.Label);
                Early.RemoveAll(e => e.Id == id);
            }
        }

        private void Learn(string id, int label)
        {
            if (!_events.TryGetValue(id, out var e)) Early.Add((id, label, _clock));
            else if (e.Label == label) Repeated++;
            else
            {
                if (e.Label is null) Labelled++;
                else Corrected++;
                Bad += label == 1 ? 1 : e.Label is null ? 0 : -1;
            }
            if (_events.ContainsKey(id)) _events[id] = e with { Label = label, IsAssumed = false };
        }
    }
}
