using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Persistence;
using static StreamLogit.Engine.Tests.RecordText;

namespace StreamLogit.Engine.Tests;

/// <summary>A definition changes its bank between two runs, while events await their labels.</summary>
public sealed class ChangedBankTests
{
    private static readonly SgdSetting Slow = new(0.1, 0, 0);
    private static readonly SgdSetting Fast = new(0.5, 0, 0);
    private static readonly AdagradSetting Adaptive = new(0.2, 0);

    [Fact]
    public void Load_ChangedBank_TeachesWaitingEventsAsIfNothingHadHappened()
    {
        string[] before = [.. Enumerable.Range(0, 20).Select(i => Event($"e{i}", i, i % 5, i % 3 == 0 ? null : i % 2))];
        string[] after = [Label("e0", 30, 1), Label("e9", 31, 0), Event("x", 32, 1, 1), Label("e18", 33, 1), Event("y", 34, 2)];
        var undisturbed = new EngineRun(Of(Slow, Fast)).Take(before).Take(after);

        var first = new EngineRun(Of(Slow, Fast)).Take(before);
        var state = new StateBlocks();
        first.Engine.Save(state);
        var second = new EngineRun(Of(Adaptive, Fast));
        BankChange change = second.Engine.Load(state);
        second.Take(after);

        Assert.Equal([Fast.Name], change.Kept);
        Assert.Equal([Adaptive.Name], change.Started);
        Assert.Equal([Slow.Name], change.Dropped);
        Assert.Equal(undisturbed.Engine.Model().Settings[1], second.Engine.Model().Settings[1], (a, b) => a.Intercept == b.Intercept && a.Coefficients.SequenceEqual(b.Coefficients));

        // Fast has its losses from the start; the new setting only those since, for waiting events those of what was published.
        var figures = second.Engine.Health().Settings;
        Assert.Equal(undisturbed.Engine.Health().Settings[1].LogLoss, figures[1].LogLoss, 1e-14);
        Assert.Equal(undisturbed.Engine.Health().Settings[1].Brier, figures[1].Brier, 1e-14);
        double published = first.Scores.Where(s => s.Id is "e0" or "e9" or "e18").Sum(s => Math.Log(1 + Math.Exp(s.Id == "e9" ? s.LogOdds : -s.LogOdds)));
        double own = figures[0].LogLoss * 4 - published;
        Assert.InRange(own, 0.01, 3);
        Assert.InRange(figures[0].BlendWeight, 0.01, 0.99);
    }

    private static EngineDefinition Of(params SettingOptions[] bank) =>
        Definitions.Of(new NumberFeature("x", NumberScale.None)) with { Learning = new LearningOptions { Slots = 16, Bank = [.. bank] } };
}
