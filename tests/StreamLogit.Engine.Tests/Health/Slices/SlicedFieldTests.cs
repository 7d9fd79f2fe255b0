using System.Globalization;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Tests.Health.Detection;

namespace StreamLogit.Engine.Tests.Health.Slices;

public class SlicedFieldTests
{
    [Fact]
    public void Slices_FrequentValues_HaveFiguresOfTheirOwnAndAddUpToTheWhole()
    {
        var run = new EngineRun(DefinitionOf(values: 3)).Take(Stream(20_000, Typical), 500);
        var health = run.Engine.Health();
        Assert.Equal(["app", "web", "desk", null], health.Slices.Select(s => s.Value));
        Assert.All(health.Slices, s => Assert.Equal("channel", s.Field));
        Assert.Equal(health.Total.Count, health.Slices.Sum(s => s.Total.Count));
        Assert.Equal(health.Total.LogLoss * health.Total.Weight, health.Slices.Sum(s => s.Total.LogLoss * s.Total.Weight), 1e-6);
        Assert.Equal(health.Windows[1].Figures.Count, health.Slices.Sum(s => s.Windows[1].Figures.Count));
        // Half of the events are app; the first ones came before it had a place.
        Assert.InRange(health.Slices[0].Total.Count, 9_000, 10_300);
        Assert.Equal(0.2, health.Slices[0].Total.ObservedRate, 0.02);
        Assert.Equal(0.05, health.Slices[1].Total.ObservedRate, 0.02);
        Assert.NotEmpty(health.Slices[0].History.Hours);
    }

    [Fact]
    public void Slices_LateLabels_CountForTheValueOfTheirEvent()
    {
        var run = new EngineRun(DefinitionOf(values: 3)).Take(Stream(2_000, Typical), 500);
        var before = run.Engine.Health();
        run.Take(Event(2_100, "web", label: null), "{\"id\":\"e2100\",\"time\":\"1970-01-02T00:00:00Z\",\"label\":1}");
        var after = run.Engine.Health();
        Assert.Equal(before.Slices[1].Total.Count + 1, after.Slices[1].Total.Count);
        Assert.Equal(before.Slices[0].Total.Count, after.Slices[0].Total.Count);
    }

    [Fact]
    public void Slices_ValueThatBecomesFrequent_TakesThePlaceOfTheRarest()
    {
        var records = Stream(20_000, Typical).Concat(Stream(20_000, (random, i) => random.Uniform() < 0.6 ? "kiosk" : "app", first: 20_000)).ToList();
        var run = new EngineRun(DefinitionOf(values: 3)).Take(records, 500);
        var health = run.Engine.Health();
        Assert.Equal(["kiosk", "app"], health.Slices.Take(2).Select(s => s.Value));
        Assert.Equal(4, health.Slices.Length);
        // What it had before it took the place stands with the rest.
        Assert.InRange(health.Slices[0].Total.Count, 2_000, 12_000);
    }

    [Fact]
    public void Slices_ManyRareValues_StayTogether()
    {
        var run = new EngineRun(DefinitionOf(values: 8)).Take(Stream(20_000, (_, i) => "card" + i.ToString(CultureInfo.InvariantCulture)), 500);
        Assert.Equal([null], run.Engine.Health().Slices.Select(s => s.Value));
    }

    [Fact]
    public void SaveAndLoad_InTheMiddle_GoesOnToTheSameFigures()
    {
        var records = Stream(12_000, (random, i) => i < 6_000 ? Typical(random, i) : random.Uniform() < 0.6 ? "kiosk" : "app");
        var whole = new EngineRun(DefinitionOf(values: 3)).Take(records, 500);
        var kept = new StateBlocks();
        var resumed = new EngineRun(DefinitionOf(values: 3));
        foreach (string[] part in records.Chunk(997))
        {
            resumed.Take(part, 100);
            resumed.Engine.Save(kept);
            var engine = new ScoringEngine(DefinitionOf(values: 3));
            engine.Load(kept);
            resumed = new EngineRun(engine);
        }
        HealthLedgerTests.AssertSame(whole.Engine.Health(), resumed.Engine.Health());
    }

    [Fact]
    public void Load_SliceAddedToTheDefinition_StartsItAnew()
    {
        var kept = new StateBlocks();
        var without = DefinitionOf(values: 3) with { Health = new HealthOptions() };
        new EngineRun(without).Take(Stream(1_000, Typical), 500).Engine.Save(kept);
        var engine = new ScoringEngine(DefinitionOf(values: 3));
        engine.Load(kept);
        new EngineRun(engine).Take(Stream(1_000, Typical, first: 1_000), 500);
        Assert.Equal(2_000, engine.Health().Total.Count);
        Assert.Equal(1_000, engine.Health().Slices.Sum(s => s.Total.Count));
    }

    private static string Typical(FixedStream random, int i) => random.Uniform() switch { < 0.5 => "app", < 0.8 => "web", < 0.97 => "desk", _ => "other" + (i % 50).ToString(CultureInfo.InvariantCulture) };

    private static EngineDefinition DefinitionOf(int values) => Definitions.Of(new NumberFeature("x", NumberScale.None)) with
    {
        Health = new HealthOptions { Slices = ["channel"], SliceValues = values, LastLabels = 10 },
    };

    /// <summary>Labelled events, one in ten seconds; a fifth of those from app are bad, a twentieth of the others.</summary>
    private static List<string> Stream(int events, Func<FixedStream, int, string> channel, int first = 0)
    {
        var random = new FixedStream(31);
        return [.. Enumerable.Range(first, events).Select(i =>
        {
            string value = channel(random, i);
            return Event(i, value, random.Label(value == "app" ? 0.2 : 0.05));
        })];
    }

    private static string Event(long i, string channel, int? label) => string.Create(
        CultureInfo.InvariantCulture,
        $"{{\"id\":\"e{i}\",\"time\":\"{DateTimeOffset.UnixEpoch.AddSeconds(10.0 * i):yyyy-MM-ddTHH:mm:ssZ}\",\"x\":1,\"channel\":\"{channel}\"{(label is null ? "" : $",\"label\":{label}")}}}");
}
