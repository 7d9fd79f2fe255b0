using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests;

public sealed class WarmStartTests
{
    private static readonly FeatureOptions[] Features = [new NumberFeature("x", NumberScale.Standard), new CategoryFeature(["c"])];
    private static readonly EngineDefinition Cold = Definitions.Of(Features);

    [Fact]
    public void Process_WarmStart_ScoresTheFirstEventWithIt()
    {
        var (warm, fitted) = Fitted();

        // The scale of x goes on from the fitted events, so the first score is what the fit would give the event after them.
        double scaled = Scaled(new EngineRun(Cold).Take(Records(0, 50)).Engine, 7);
        Assert.True(scaled > 0.5);
        Assert.Equal(["x", "c=b"], fitted.Coefficients.Select(c => c.Feature));
        Assert.Equal(0.3 + 2 * scaled - 1, new EngineRun(warm).Take(Record(50, "new", 7, "b")).Scores[0].LogOdds, 1e-12);
    }

    [Fact]
    public void Process_StartProbabilityToo_DoesNotCountItTwice()
    {
        var (warm, _) = Fitted();
        var both = warm with { Learning = warm.Learning with { StartProbability = 0.01 } };
        Assert.Equal(
            new EngineRun(warm).Take(Record(50, "new", 7, "b")).Scores[0].LogOdds,
            new EngineRun(both).Take(Record(50, "new", 7, "b")).Scores[0].LogOdds);
    }

    [Fact]
    public void Process_WeightDecay_PullsBackToTheWarmStart()
    {
        var (warm, _) = Fitted();
        warm = warm with { Learning = warm.Learning with { Bank = [new SgdSetting(0.1, 0, 0.5)] } };
        var run = new EngineRun(warm);
        double Coefficient() => run.Engine.Model().Settings[0].Coefficients.Single(c => c.Feature == "c=b").Value;
        run.Take([Record(50, "1", 7, "b", 1)]);
        double moved = Coefficient();
        Assert.True(Math.Abs(moved - -1) > 0.01);
        run.Take([.. Enumerable.Range(51, 400).Select(i => Record(i, $"{i}", 7, "a", i % 2))]);
        Assert.Equal(-1, Coefficient(), 1e-6);
    }

    [Fact]
    public void SaveAndLoad_WarmStart_GoesOnToTheSameBits()
    {
        var (warm, _) = Fitted();
        var whole = new EngineRun(warm).Take(Records(50, 60));
        var state = new StateBlocks();
        var half = new EngineRun(warm).Take(Records(50, 30));
        half.Engine.Save(state);

        // Whoever goes on need not have the file of the warm start any more.
        var engine = new ScoringEngine(warm with { Learning = warm.Learning with { WarmStart = null } });
        engine.Load(state);
        var rest = new EngineRun(engine).Take(Records(80, 30));
        Assert.Equal(whole.Scores.Skip(30).Select(s => s.LogOdds), rest.Scores.Select(s => s.LogOdds));
    }

    [Fact]
    public void Engine_WarmStartOfOtherFeatures_Throws()
    {
        var (warm, fitted) = Fitted();
        var other = Definitions.Of(new NumberFeature("x", NumberScale.None), Features[1]);
        Assert.Contains(
            "fit it again with this definition",
            Assert.Throws<InvalidStateException>(() => new ScoringEngine(With(other, fitted))).Message, StringComparison.Ordinal);
        Assert.Throws<InvalidStateException>(() => new ScoringEngine(With(warm, fitted with { Coefficients = [new FittedCoefficient(1 << 20, "x", 1)] })));
        Assert.Throws<InvalidStateException>(() => new ScoringEngine(With(warm, fitted with { Scales = [new FittedScale(0, [1, 2, 3])] })));
        Assert.Throws<InvalidStateException>(() => new ScoringEngine(With(warm, fitted with { Scales = [new FittedScale(9, [])] })));
    }

    private static (EngineDefinition Warm, FittedModel Fitted) Fitted()
    {
        var engine = new EngineRun(Cold).Take(Records(0, 50)).Engine;
        var names = engine.UsedSlots.ToDictionary(s => s.Slot, s => s.Name);
        var fitted = engine.ToFittedModel(0.3, slot => names[slot] switch { "x" => 2, "c=b" => -1, _ => 0 });
        return (With(Cold, fitted), fitted);
    }

    private static EngineDefinition With(EngineDefinition definition, FittedModel fitted) =>
        definition with { Learning = definition.Learning with { WarmStart = fitted } };

    private static double Scaled(ScoringEngine engine, double x)
    {
        // The next event's x in standard deviations from the mean, as the engine itself encodes it.
        double seen = double.NaN;
        engine.Labelled = (in LabelledEvent e) => seen = e.Vector.Values[0];
        new EngineRun(engine).Take(Record(99, "probe", x, "b", 1));
        return seen;
    }

    private static string[] Records(int from, int count) =>
        [.. Enumerable.Range(from, count).Select(i => Record(i, $"r{i}", i * i % 11, i % 3 == 0 ? "a" : "b", i % 2))];

    private static string Record(int second, string id, double x, string c, int? label = null) => FormattableString.Invariant(
        $$"""{"id":"{{id}}","time":"2026-03-01T00:{{second / 60:00}}:{{second % 60:00}}Z","x":{{x}},"c":"{{c}}"{{(label is null ? "" : $",\"label\":{label}")}}}""");
}
