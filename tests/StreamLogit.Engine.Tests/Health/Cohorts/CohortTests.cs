using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health.Cohorts;
using StreamLogit.Engine.Persistence;
using static StreamLogit.Engine.Tests.RecordText;

namespace StreamLogit.Engine.Tests.Health.Cohorts;

public class CohortTests
{
    private const double HourSeconds = 3600;
    private static readonly NumberFeature X = new("x", NumberScale.None);

    [Fact]
    public void Health_LabelsThatComeLate_CountAtTheHourOfTheirEvent()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(
            Event("a", 0, x: 1), Event("b", 10, x: 1), Event("c", 20, x: 1),
            Event("d", HourSeconds, x: 1),
            Label("a", 2 * HourSeconds, 1), Label("d", 26 * HourSeconds, 0));
        var cohorts = run.Engine.Health().Cohorts;
        Assert.Equal([(0L, 3L, 1.0), (LedgerRun.Hour, 1L, 1.0)], cohorts.Hours.Select(h => (h.FromMicroseconds, h.Events, h.Labelled)));
        Assert.Equal([(0L, 4L, 2.0)], cohorts.Days.Select(d => (d.FromMicroseconds, d.Events, d.Labelled)));
        // All four were published with 0.5, as nothing had been learned.
        Assert.All(cohorts.Hours, hour => Assert.Equal(Math.Log(2), hour.LogLoss, 1e-15));
        Assert.Equal([1.0, 0.0], cohorts.Hours.Select(h => h.ObservedRate));
        // At 26 hours the events are 25.5 and 24.5 hours old, by the middle of their hour.
        Assert.Equal([new LabelledAtAge(24 * LedgerRun.Hour, 48 * LedgerRun.Hour, 4, 2)], cohorts.ByAge);
        Assert.Equal(0.5, cohorts.ByAge[0].Share);
    }

    [Fact]
    public void Health_EventsOfSeveralAges_TellsTheShareLabelledOfEach()
    {
        var records = new List<string>();
        // One event an hour over ten days; every second one gets its label after a day.
        for (int hour = 0; hour < 240; hour++)
        {
            records.Add(Event($"e{hour}", hour * HourSeconds, x: 1));
            if (hour >= 24 && hour % 2 == 0) records.Add(Label($"e{hour - 24}", hour * HourSeconds + 1, 0));
        }
        var ages = new EngineRun(Definitions.Of(X)).Take(records, batchSize: 7).Engine.Health().Cohorts.ByAge;
        Assert.Equal(240, ages.Sum(a => a.Events));
        Assert.All(ages, age => Assert.Equal(age.FromMicroseconds < 24 * LedgerRun.Hour ? 0 : 0.5, age.Share, 0.03));
        Assert.Equal(ages.Select(a => a.ToMicroseconds).SkipLast(1), ages.Select(a => a.FromMicroseconds).Skip(1));
    }

    [Fact]
    public void Health_HoursBeyondTheHistory_GoOnAsDays()
    {
        var definition = Definitions.Of(X) with { Health = new HealthOptions { History = new HealthHistoryOptions { Hours = 24, Days = 7 } } };
        var run = new EngineRun(definition);
        for (int hour = 0; hour < 240; hour++) run.Take(Event($"e{hour}", hour * HourSeconds, x: 1, label: 0));
        var cohorts = run.Engine.Health().Cohorts;
        Assert.Equal(24, cohorts.Hours.Length);
        Assert.Equal(216 * LedgerRun.Hour, cohorts.Hours[0].FromMicroseconds);
        Assert.Equal([24L, 24, 24, 24, 24, 24, 24], cohorts.Days.Select(d => d.Events));
        Assert.Equal(24 * 7, cohorts.ByAge.Sum(a => a.Events));
        Assert.All(cohorts.ByAge, age => Assert.Equal(1, age.Share));
    }

    [Fact]
    public void Health_LabelCorrected_TheHourOfTheEventTellsTheFinalTruth()
    {
        var run = new EngineRun(Definitions.Of(X)).Take(
            Event("a", 0, x: 1), Event("b", 1, x: 1, label: 0), Event("later", 5 * HourSeconds, x: 1, label: 1),
            Label("a", 6 * HourSeconds, 1), Label("a", 7 * HourSeconds, 0));
        var first = run.Engine.Health().Cohorts.Hours[0];
        Assert.Equal((2L, 2.0, 0.0), (first.Events, first.Labelled, first.ObservedRate));
        Assert.Equal(Math.Log(2), first.LogLoss, 1e-12);
    }

    [Theory]
    [InlineData(null)]
    [InlineData(0)]
    [InlineData(1)]
    public void Health_LabelOnlyAssumed_DoesNotCountAsKnownUntilItComes(int? label)
    {
        var definition = Definitions.Of(X) with { Labels = new LabelOptions { WaitMicroseconds = 3600_000_000, Unlabelled = UnlabelledEvents.Negative } };
        var run = new EngineRun(definition).Take(Event("a", 0, x: 1), Event("b", 1.5 * HourSeconds, x: 1));
        if (label is { } known) run.Take(Label("a", 1.6 * HourSeconds, known));
        var first = run.Engine.Health().Cohorts.Hours[0];
        Assert.Equal(label is null ? 0 : 1, first.Labelled);
        Assert.Equal(1, first.Weight); // it was learned as 0
        Assert.Equal(label ?? 0, first.ObservedRate);
    }

    [Fact]
    public void Health_ThinnedEvents_KeptOnesCountForThoseLeftOut()
    {
        var definition = Definitions.Of(X) with { Labels = new LabelOptions { Keep = new ThinningOptions(0.9, 4) } };
        var run = new EngineRun(definition);
        for (int i = 0; i < 4000; i++) run.Take(Event($"e{i}", 0.01 * i, x: 0));
        for (int i = 0; i < 4000; i++) run.Take(Label($"e{i}", 100 + 0.01 * i, 0));
        var hour = Assert.Single(run.Engine.Health().Cohorts.Hours);
        Assert.Equal(4000, hour.Events);
        Assert.InRange(hour.LabelledShare, 0.9, 1.1);
    }

    [Fact]
    public void SaveAndLoad_InTheMiddle_ContinuesToTheSameBits()
    {
        var options = new HealthOptions { History = new HealthHistoryOptions { Hours = 30, Days = 7 } };
        var kept = new StateBlocks();
        LedgerRun whole = new(options), resumed = new(options);
        for (int i = 0; i < 3000; i++)
        {
            long delay = i % 7 * 3 * LedgerRun.Hour;
            foreach (var run in new[] { whole, resumed }) run.Label((i + 100) * 6 * LedgerRun.Minute, Math.Sin(i), i % 2, 1 + i % 3, delay);
            if (i % 311 == 0) resumed.Resume(kept);
            if (i % 101 == 0) _ = resumed.Snapshot; // looking changes nothing
        }
        Assert.Equal(whole.Snapshot.Cohorts, resumed.Snapshot.Cohorts);
        Assert.Equal(30, whole.Snapshot.Cohorts.Hours.Length);
        Assert.Equal(7, whole.Snapshot.Cohorts.Days.Length);
    }

    [Fact]
    public void CountLabel_EventsOfHoursThatAreNotKept_CountInTheirDays()
    {
        LedgerRun few = new(new HealthOptions { History = new HealthHistoryOptions { Hours = 24, Days = 30 } }), all = new();
        for (int i = 0; i < 2000; i++)
            foreach (var run in new[] { few, all }) run.Label((i + 1000) * 20 * LedgerRun.Minute, Math.Sin(i), i % 2, delay: i % 9 * 25 * LedgerRun.Hour);
        var (expected, got) = (all.Snapshot.Cohorts.Days.TakeLast(25), few.Snapshot.Cohorts.Days.TakeLast(25));
        Assert.Equal(expected.Select(d => (d.FromMicroseconds, d.Labelled, d.ObservedRate)), got.Select(d => (d.FromMicroseconds, d.Labelled, d.ObservedRate)));
        Assert.All(expected.Zip(got), pair => Assert.Equal(pair.First.LogLoss, pair.Second.LogLoss, 1e-12));
    }

    [Theory]
    [InlineData(30, 100)]
    [InlineData(100, 30)]
    public void Load_OtherRetention_KeepsWhatFits(int before, int after)
    {
        var kept = new StateBlocks();
        var run = new LedgerRun(new HealthOptions { History = new HealthHistoryOptions { Hours = before } });
        for (int hour = 0; hour < 120; hour++) run.Label(hour * LedgerRun.Hour, Math.Sin(hour), hour % 2);
        run.Ledger.Save(kept);
        var other = new LedgerRun(new HealthOptions { History = new HealthHistoryOptions { Hours = after } });
        other.Ledger.Load(kept);
        other.MoveTo(119 * LedgerRun.Hour);
        Assert.Equal(run.Snapshot.Cohorts.Hours.TakeLast(30), other.Snapshot.Cohorts.Hours);
        other.Resume(kept);
        Assert.Equal(run.Snapshot.Cohorts.Hours.TakeLast(30), other.Snapshot.Cohorts.Hours);
        // Days hold the hours that are not kept.
        Assert.Equal(120, other.Snapshot.Cohorts.Days.Sum(d => d.Labelled));
        Assert.All(run.Snapshot.Cohorts.Days.Zip(other.Snapshot.Cohorts.Days), pair => Assert.Equal(pair.First.LogLoss, pair.Second.LogLoss, 1e-12));
    }
}
