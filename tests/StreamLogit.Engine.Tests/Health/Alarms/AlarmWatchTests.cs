using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health.Alarms;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Tests.Health.Detection;

namespace StreamLogit.Engine.Tests.Health.Alarms;

public class AlarmWatchTests
{
    private const long Minute = LedgerRun.Minute;
    private static readonly HealthWindow Hour = new("1h", LedgerRun.Hour);

    [Fact]
    public void Look_MetricBeyondTheBoundForLongEnough_RaisesAndFallsQuiet()
    {
        var run = new LedgerRun(OptionsOf(new AlarmOptions
        {
            Name = "bad", Metric = AlarmMetric.LabelRate, Window = Hour, Bound = 0.3, Minimum = 100, ForMicroseconds = 10 * Minute,
        }));
        Feed(run, 0, 120, rate: 10);
        var alarm = Assert.Single(run.Snapshot.Alarms);
        Assert.False(alarm.IsRaised);
        Assert.Equal("Share of bad labels over 1h is 10%, not above 30% (600 labels).", alarm.Sentence);

        // From minute 120 on half of the labels are bad: the hour's share passes 30 % in half an hour, and is believed after ten minutes more.
        Feed(run, 120, 100, rate: 2);
        alarm = run.Snapshot.Alarms[0];
        Assert.True(alarm.IsRaised);
        Assert.InRange(alarm.SinceMicroseconds!.Value / Minute, 120 + 40, 120 + 42);
        Assert.StartsWith("Share of bad labels over 1h is 50%, above 30%", alarm.Sentence, StringComparison.Ordinal);

        Feed(run, 220, 100, rate: 10);
        Assert.False(run.Snapshot.Alarms[0].IsRaised);
        var changes = run.Snapshot.AlarmChanges;
        Assert.Equal([(2, false), (1, true)], changes.Select(c => ((int)c.Number, c.IsRaised)));
        Assert.Equal("bad", changes[0].Name);
        Assert.True(changes[0].AtMicroseconds > changes[1].AtMicroseconds);
        Assert.Contains("not above", changes[0].Sentence, StringComparison.Ordinal);
    }

    [Fact]
    public void Look_BeyondTheBoundForTooShort_StaysQuiet()
    {
        var run = new LedgerRun(OptionsOf(new AlarmOptions
        {
            Name = "bad", Metric = AlarmMetric.LabelRate, Window = Hour, Bound = 0.3, ForMicroseconds = 60 * Minute,
        }));
        Feed(run, 0, 100, rate: 10);
        Feed(run, 100, 40, rate: 2);
        Feed(run, 140, 200, rate: 10);
        Assert.Empty(run.Snapshot.AlarmChanges);
    }

    [Fact]
    public void Look_TooFewLabels_KeepsTheStateAndSaysSo()
    {
        var run = new LedgerRun(OptionsOf(new AlarmOptions { Name = "bad", Metric = AlarmMetric.LabelRate, Window = Hour, Bound = 0.3, Minimum = 500 }));
        Feed(run, 0, 20, rate: 1);
        var alarm = run.Snapshot.Alarms[0];
        Assert.False(alarm.IsRaised);
        Assert.Equal("Share of bad labels over 1h cannot be told from 190 labels, 500 are asked for; it stays quiet.", alarm.Sentence);
        Feed(run, 20, 60, rate: 1);
        Assert.True(run.Snapshot.Alarms[0].IsRaised);

        // A day of silence empties the window; nobody can say that it is over.
        run.Label(2000 * Minute, 0, 0);
        run.Label(2010 * Minute, 0, 0);
        Assert.True(run.Snapshot.Alarms[0].IsRaised);
        Assert.Contains("it stays raised", run.Snapshot.Alarms[0].Sentence, StringComparison.Ordinal);
    }

    [Fact]
    public void Read_EveryMetric_IsThatOfTheSnapshot()
    {
        var alarms = Enum.GetValues<AlarmMetric>().Select(metric => new AlarmOptions { Name = metric.ToString(), Metric = metric, Window = Hour, Bound = 1e9, Minimum = 0 });
        var run = new LedgerRun(OptionsOf([.. alarms]) with { Reference = new HealthReferenceOptions { LengthMicroseconds = LedgerRun.Hour } });
        var random = new FixedStream(1);
        for (int i = 0; i < 3000; i++)
        {
            double logOdds = random.Normal() - 1;
            run.Label(i * 3_000_000L, logOdds, random.Label(1 / (1 + Math.Exp(-logOdds))), delay: 1 + (long)(random.Uniform() * 1e9));
        }
        var window = run.Snapshot.Windows[0];
        run.MoveTo(150 * Minute); // the minute of that snapshot closes, and the alarms are looked at
        var byMetric = run.Snapshot.Alarms.ToDictionary(a => a.Alarm.Metric);
        var figures = window.Figures;
        var expected = new Dictionary<AlarmMetric, double>
        {
            [AlarmMetric.LogLoss] = figures.LogLoss,
            [AlarmMetric.LogLossRatio] = figures.LogLossRatio,
            [AlarmMetric.Brier] = figures.Brier,
            [AlarmMetric.ObservedToExpected] = figures.Promised.ObservedToExpected,
            [AlarmMetric.SpiegelhalterZ] = figures.Spiegelhalter.Z,
            [AlarmMetric.CalibrationError] = figures.Scores.CalibrationError.Expected,
            [AlarmMetric.CalibrationIntercept] = figures.Scores.Calibration.Intercept,
            [AlarmMetric.CalibrationSlope] = figures.Scores.Calibration.Slope,
            [AlarmMetric.Auc] = figures.Scores.RocArea.Area,
            [AlarmMetric.LabelRate] = figures.ObservedRate,
            [AlarmMetric.MeanProbability] = figures.MeanProbability,
            [AlarmMetric.Precision] = figures.Alerts.Precision,
            [AlarmMetric.Recall] = figures.Alerts.Recall,
            [AlarmMetric.Labels] = figures.Count,
            [AlarmMetric.LabelDelaySeconds] = window.Stream!.LabelDelays.QuantileSeconds(0.5),
            [AlarmMetric.Events] = 0,
            [AlarmMetric.Changes] = 0,
        };
        foreach (var (metric, value) in expected) Assert.Equal(value, byMetric[metric].Value, 1e-12 * Math.Abs(value));
        Assert.All(new[] { AlarmMetric.AlertRate, AlarmMetric.RejectShare, AlarmMetric.Drift, AlarmMetric.MissingShare, AlarmMetric.UnseenShare }, m => Assert.True(double.IsNaN(byMetric[m].Value)));
        Assert.All(byMetric.Values, a => Assert.DoesNotContain("not been looked at", a.Sentence, StringComparison.Ordinal));
    }

    [Fact]
    public void Look_ChangeWasFound_NamesIt()
    {
        var run = new LedgerRun(OptionsOf(new AlarmOptions { Name = "change", Metric = AlarmMetric.Changes, Window = Hour, Bound = 0, Minimum = 0 }) with
        {
            LabelsPerFalseAlarm = 10_000,
            DetectAfterLabels = 0,
        });
        Feed(run, 0, 60, rate: 2);
        Assert.True(run.Snapshot.Alarms[0].IsRaised || run.Snapshot.Changes.IsEmpty);
        Feed(run, 60, 30, rate: 1);
        var alarm = run.Snapshot.Alarms[0];
        Assert.True(alarm.IsRaised);
        Assert.Contains("were promised to be bad", alarm.Sentence, StringComparison.Ordinal);
        // Two hours later it is over.
        Feed(run, 90, 200, rate: 2);
        Assert.False(run.Snapshot.Alarms[0].IsRaised);
    }

    [Fact]
    public void SaveAndLoad_AlarmsOfAnotherDefinition_KeepTheirStateByName()
    {
        var raised = new AlarmOptions { Name = "raised", Metric = AlarmMetric.LabelRate, Window = Hour, Bound = 0.3, Minimum = 10 };
        var gone = new AlarmOptions { Name = "gone", Metric = AlarmMetric.Brier, Window = Hour, Bound = 0.3, Minimum = 10 };
        var added = new AlarmOptions { Name = "added", Metric = AlarmMetric.Auc, Window = Hour, Bound = 0.6, IsAbove = false, Minimum = 10 };
        var kept = new StateBlocks();
        var run = new LedgerRun(OptionsOf(gone, raised));
        Feed(run, 0, 30, rate: 1);
        Assert.True(run.Snapshot.Alarms[1].IsRaised);
        run.Ledger.Save(kept);

        var other = new LedgerRun(OptionsOf(added, raised));
        other.Ledger.Load(kept);
        var alarms = other.MoveTo(29 * Minute).Snapshot.Alarms;
        Assert.Equal(["added", "raised"], alarms.Select(a => a.Alarm.Name));
        Assert.Equal([false, true], alarms.Select(a => a.IsRaised));
        Assert.Contains("has not been looked at", alarms[0].Sentence, StringComparison.Ordinal);
        Assert.Equal(run.Snapshot.Alarms[1], alarms[1]);
        Assert.Equal(run.Snapshot.AlarmChanges, other.Snapshot.AlarmChanges);
    }

    [Fact]
    public void Look_LongWindows_AreLookedAtOnceAnHour()
    {
        var state = new AlarmState(new AlarmOptions { Name = "week", Metric = AlarmMetric.Brier, Window = new HealthWindow("7d", 7 * LedgerRun.Day), Bound = 1 });
        Assert.Equal(60, state.MinutesBetweenLooks);
        Assert.Equal(1, new AlarmState(new AlarmOptions { Name = "hour", Metric = AlarmMetric.Brier, Window = Hour, Bound = 1 }).MinutesBetweenLooks);
        Assert.Equal(24, new AlarmState(new AlarmOptions { Name = "day", Metric = AlarmMetric.Brier, Window = new HealthWindow("1d", LedgerRun.Day), Bound = 1 }).MinutesBetweenLooks);
    }

    private static HealthOptions OptionsOf(params AlarmOptions[] alarms) => new() { Alarms = [.. alarms] };

    /// <summary>Ten labels a minute at even odds, one in <paramref name="rate"/> of them bad.</summary>
    private static void Feed(LedgerRun run, long firstMinute, int minutes, int rate)
    {
        for (long minute = firstMinute; minute < firstMinute + minutes; minute++)
            for (int i = 0; i < 10; i++) run.Label(minute * Minute, 0, (minute * 10 + i) % rate == 0 ? 1 : 0);
    }
}
