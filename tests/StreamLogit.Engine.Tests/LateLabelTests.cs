using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;
using static StreamLogit.Engine.Tests.RecordText;

namespace StreamLogit.Engine.Tests;

public class LateLabelTests
{
    private const long Second = 1_000_000;
    private static readonly NumberFeature X = new("x", NumberScale.None);

    [Fact]
    public void Process_LateLabel_TeachesTheFeaturesOfTheEventAndCountsWhatWasPublished()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(
            Event("late", 0, x: 3),
            Event("other", 1, x: 1, label: 0),
            Label("late", 2, 1));
        var model = run.Engine.Model().Settings[0];
        // The second step meets p = sigmoid(-0.05 - 0.05 * 3), with present coefficients; health counts the 0.5 that was published.
        double p = 1 / (1 + Math.Exp(0.2));
        Assert.Equal(-0.05 + 0.1 * (1 - p), model.Intercept, 1e-15);
        Assert.Equal(-0.05 + 0.1 * (1 - p) * 3, model.Coefficients.Single(c => c.Feature == "x").Value, 1e-15);
        Assert.Equal(Math.Log(2), run.Engine.Health().Total.LogLoss, 1e-15);
        Assert.Equal(2, run.Engine.Health().Labelled);
        Assert.Equal(0, run.Engine.Health().Awaiting);
    }

    [Fact]
    public void Process_LabelOfAnUnknownEvent_WaitsAndIsThenRejectedWithItsPlace()
    {
        var run = new EngineRun(Definitions.Of(X)).Take([Label("nobody", 0, 1), Event("a", 3600, x: 1), Event("b", 3601, x: 1)], batchSize: 1);
        Assert.Equal([(1L, RejectReason.LabelUnknownEvent)], run.Rejects);
        Assert.Equal(1, run.Engine.Health().RejectsByReason["label-unknown-event"]);
        Assert.Equal(2, run.Engine.Health().Events);
    }

    [Fact]
    public void End_EarlyLabelsLeft_AreRejected()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 1), Label("nobody", 1, 1));
        Assert.Equal(1, run.Engine.Health().Early);
        var batch = new RecordBatch(run.Engine.Schema);
        run.Engine.End(batch);
        Assert.Equal(RejectReason.LabelUnknownEvent, batch.Record(Assert.Single(batch.Rejects)).Reason);
        Assert.Equal(0, run.Engine.Health().Early);
    }

    [Fact]
    public void Process_LabelBeforeItsEvent_TeachesWhenTheEventHasBeenScored()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(Label("a", 5, 1), Event("a", 6, x: 2), Event("b", 7, x: 2));
        Assert.Equal(0.5, run.Scores[0].Probability);
        Assert.Equal(0.25, run.Scores[1].LogOdds, 1e-15);
        Assert.Equal(1, run.Engine.Health().Labelled);
    }

    [Theory]
    [InlineData(UnlabelledEvents.Drop, 0, 0.0)]
    [InlineData(UnlabelledEvents.Negative, 1, -0.05)]
    public void Process_WaitIsOver_DropsOrLearnsNegative(UnlabelledEvents unlabelled, int labelled, double intercept)
    {
        var run = new EngineRun(Waiting(10, unlabelled)).Take(Event("a", 0, x: 0), Event("b", 11, x: 0));
        Assert.Equal(1, run.Engine.Health().Expired);
        Assert.Equal(labelled, run.Engine.Health().Labelled);
        Assert.Equal(intercept, run.Engine.Model().Settings[0].Intercept, 1e-15);
        Assert.Equal(1, run.Engine.Health().Awaiting);
    }

    [Fact]
    public void Process_RealLabelAfterAnAssumedOne_CorrectsIt()
    {
        var run = new EngineRun(Waiting(10, UnlabelledEvents.Negative)).Take(Event("a", 0, x: 0), Event("b", 11, x: 0), Label("a", 12, 1));
        var health = run.Engine.Health();
        Assert.Equal((1, 1L, 1.0), (health.Corrected, health.Labelled, health.Total.ObservedRate));
        // First the step of 0.1 (0 - 0.5), then 0.1 (1 - sigmoid(-0.05)).
        Assert.Equal(-0.05 + 0.1 * (1 - 1 / (1 + Math.Exp(0.05))), run.Engine.Model().Settings[0].Intercept, 1e-15);
    }

    [Fact]
    public void Process_SameLabelAgain_IsCountedAndNotLearned()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 1), Label("a", 1, 1), Label("a", 2, 1));
        Assert.Equal(1, run.Engine.Health().Repeated);
        Assert.Equal(0.05, run.Engine.Model().Settings[0].Intercept, 1e-15);
        Assert.Empty(run.Rejects);
    }

    [Fact]
    public void Process_OppositeLabel_IsLearnedAndHealthCountsTheFinalTruth()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 1), Event("b", 0, x: 1), Label("a", 1, 1), Label("b", 1, 0), Label("a", 2, 0));
        var straight = new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 1), Event("b", 0, x: 1), Label("a", 1, 0), Label("b", 1, 0));
        var (corrected, truth) = (run.Engine.Health(), straight.Engine.Health());
        Assert.Equal(1, corrected.Corrected);
        Assert.Equal(truth.Labelled, corrected.Labelled);
        Assert.Equal(truth.Total.LogLoss, corrected.Total.LogLoss, 1e-14);
        Assert.Equal(truth.Total.Brier, corrected.Total.Brier, 1e-14);
        Assert.Equal(truth.Settings[0].LogLoss, corrected.Settings[0].LogLoss, 1e-14);
        Assert.All(corrected.Windows, w => Assert.Equal((2L, 0.0), (w.Figures.Count, w.Figures.ObservedRate)));
        Assert.Equal(3, run.Engine.Model().Version);
    }

    [Fact]
    public void Process_CorrectionAfterTheWait_IsUnknown()
    {
        var run = new EngineRun(Waiting(10, UnlabelledEvents.Drop)).Take(Event("a", 0, x: 1), Label("a", 1, 1), Event("b", 11, x: 1), Label("a", 11, 0));
        Assert.Equal(0, run.Engine.Health().Corrected);
        Assert.Equal(1, run.Engine.Health().Early);
    }

    [Fact]
    public void Process_TimeRunsBackwards_MovesNoClockBack()
    {
        var run = new EngineRun(Waiting(10, UnlabelledEvents.Drop)).Take(Event("a", 100, x: 1), Event("b", 1, x: 1), Event("c", 105, x: 1));
        Assert.Equal(105 * Second, run.Engine.Health().ClockMicroseconds);
        Assert.Equal(3, run.Engine.Health().Awaiting);
    }

    [Fact]
    public void Process_OneBadClock_IsRejectedAndExpiresNothing()
    {
        var run = new EngineRun(Waiting(3600, UnlabelledEvents.Drop)).Take(
            Event("a", 0, x: 1), Event("b", 1, x: 1), Event("future", 400 * 86400, x: 1), Event("c", 2, x: 1));
        Assert.Equal([RejectReason.TimeAhead], run.Rejects.Select(r => r.Reason));
        Assert.Equal(3, run.Engine.Health().Awaiting);
        Assert.Equal(2 * Second, run.Engine.Health().ClockMicroseconds);
    }

    [Fact]
    public void Process_StreamResumesAfterALongSilence_ClockFollowsAfterTenRecords()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 1), Event("b", 1, x: 1));
        for (int i = 0; i < 12; i++) run.Take(Event($"later-{i}", 3 * 86400 + i, x: 1));
        Assert.Equal(9, run.Rejects.Count);
        Assert.Equal((3 * 86400 + 11) * Second, run.Engine.Health().ClockMicroseconds);
    }

    [Fact]
    public void Process_RecordsWeeksApart_AreAllTaken()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(Event("a", 0, x: 1));
        for (int i = 1; i < 30; i++) run.Take(Event($"e{i}", i * 7 * 86400 + (i % 3 == 0 ? 40 * 86400 : 0), x: 1));
        Assert.Empty(run.Rejects);
    }

    [Fact]
    public void Process_Thinned_StaysUnbiased()
    {
        // A small step, so that a tenth of the events at ten times the weight makes the steps rougher but not the model another one.
        var full = Definitions.Of(X) with { Learning = new LearningOptions { Slots = 16, Bank = [new SgdSetting(0.003, 0, 0)] } };
        var thinned = full with { Labels = new LabelOptions { Keep = new ThinningOptions(Above: 0.3, OneIn: 10) } };
        var records = new List<string>();
        for (int i = 0; i < 40_000; i++)
        {
            double x = Math.Sin(i * 0.7) * 2;
            // About 4 % of labels are 1, more of them at high x; which events, a hash of their number decides.
            double draw = (i * 2654435761L % 1_000_003) / 1_000_003.0;
            records.Add(Event($"e{i}", i, x));
            records.Add(Label($"e{i}", i + 0.5, draw < 1 / (1 + Math.Exp(4 - 2 * x)) ? 1 : 0));
        }
        var (fullEngine, thinnedEngine) = (new EngineRun(full).Take(records, 4096).Engine, new EngineRun(thinned).Take(records, 4096).Engine);
        var (a, b) = (fullEngine.Health(), thinnedEngine.Health());
        Assert.InRange(b.Thinned, 20_000, 36_000);
        Assert.Equal(a.Labelled, b.Labelled + b.Thinned);
        Assert.Equal(1, b.Total.Weight / a.Total.Weight, 0.05);
        Assert.Equal(1, b.Total.ObservedRate / a.Total.ObservedRate, 0.08);
        Assert.Equal(1, b.Total.LogLoss / a.Total.LogLoss, 0.05);
        Assert.Equal(fullEngine.Model().Settings[0].Intercept, thinnedEngine.Model().Settings[0].Intercept, 0.15);
    }

    [Fact]
    public void Process_ThousandsOfLateRejects_ArriveInOrderWhateverTheBatches()
    {
        var records = Enumerable.Range(0, 5000).Select(i => i % 5 == 4 ? Event($"e{i}", i * 2, 1) : Label($"nobody{i}", i * 2, 1)).ToArray();
        var one = new EngineRun(Definitions.Of(X)).Take(records, 1);
        var many = new EngineRun(Definitions.Of(X)).Take(records, 4096);
        Assert.Equal(one.Rejects, many.Rejects);
        Assert.InRange(one.Rejects.Count, 2000, 4000);
    }

    [Fact]
    public void SaveAndLoad_WithEarlyLabelsAndCorrections_GoesOn()
    {
        var kept = new StateBlocks();
        var first = new EngineRun(Definitions.Of(X)).Take(Label("early", 0, 1), Event("a", 1, x: 1), Label("a", 2, 1));
        first.Engine.Save(kept);
        var engine = new ScoringEngine(Definitions.Of(X));
        engine.Load(kept);
        var second = new EngineRun(engine).Take(Event("early", 3, x: 1), Label("a", 4, 0));
        Assert.Equal(2, second.Engine.Health().Labelled);
        Assert.Equal(1, second.Engine.Health().Corrected);
        Assert.Equal(0.5, second.Engine.Health().Total.ObservedRate, 1e-15);
    }

    private static EngineDefinition Waiting(long seconds, UnlabelledEvents unlabelled) =>
        Definitions.Of(X) with { Labels = new LabelOptions { WaitMicroseconds = seconds * Second, Unlabelled = unlabelled } };
}
