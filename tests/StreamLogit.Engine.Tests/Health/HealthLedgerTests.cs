using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Metrics;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Tests.Health.Metrics;

namespace StreamLogit.Engine.Tests.Health;

public class HealthLedgerTests
{
    private const long Minute = LedgerRun.Minute;

    public static TheoryData<string> Names => Predictions.Names;

    [Theory, MemberData(nameof(Names))]
    public void CountLabel_PublishedPredictions_GivesExactFiguresOfRAndScikitLearn(string name)
    {
        var data = Predictions.Of(name);
        foreach (var figures in FiguresOf(data))
        {
            Assert.Equal(data.Value("logloss"), figures.LogLoss, 1e-12);
            Assert.Equal(LogLossMean.Of(data.Groups.AsSpan()).StandardError, figures.LogLossStandardError, 1e-12);
            Assert.Equal(data.Value("brier"), figures.Brier, 1e-12);
            Assert.Equal(data.Value("mean_p"), figures.MeanProbability, 1e-12);
            Assert.Equal(data.Value("base_rate"), figures.ObservedRate, 1e-12);
            Assert.Equal(data.Value("oe"), figures.Promised.ObservedToExpected, 1e-12);
            Assert.Equal(data.Value("spiegelhalter", "num"), figures.Spiegelhalter.Numerator, 1e-9);
            Assert.Equal(data.Value("spiegelhalter", "den"), Math.Sqrt(figures.Spiegelhalter.Variance), 1e-9);
            Assert.Equal(data.Value("spiegelhalter", "z"), figures.Spiegelhalter.Z, 1e-9);
            int[] alerts = [.. data.Labels.Where((_, i) => data.Probabilities[i] >= 0.5)];
            Assert.Equal(alerts.Length, figures.Alerts.Count);
            Assert.Equal(alerts.Average(), figures.Alerts.Precision, 1e-12);
            Assert.Equal((double)alerts.Sum() / data.Labels.Sum(), figures.Alerts.Recall, 1e-12);
            Assert.Equal((double)alerts.Length / data.Labels.Length, figures.Alerts.AlertRate, 1e-12);
            Assert.Equal(data.Probabilities.Where(p => p >= 0.5).Sum(), figures.Alerts.Promised.Expected, 1e-9);
        }
    }

    [Theory, MemberData(nameof(Names))]
    public void CountLabel_PublishedPredictions_BinnedFiguresAreWithinTheirStatedErrors(string name)
    {
        var data = Predictions.Of(name);
        foreach (var scores in FiguresOf(data).Select(f => f.Scores))
        {
            Assert.InRange(scores.RocArea.Area, data.Value("auc") - scores.RocArea.ErrorBound, data.Value("auc") + scores.RocArea.ErrorBound);
            Assert.InRange(scores.RocArea.ErrorBound, 0, 0.03); // bird strikes have 30 different probabilities only
            Assert.Equal(data.Value("auc_delong_var"), scores.RocArea.DeLongVariance, 0.02 * data.Value("auc_delong_var"));

            var calibration = scores.Calibration;
            Assert.InRange(Math.Abs(calibration.Intercept - data.Value("cal_joint", "intercept")), 0, calibration.InterceptErrorBound);
            Assert.InRange(Math.Abs(calibration.Slope - data.Value("cal_joint", "slope")), 0, calibration.SlopeErrorBound);
            // The bounds are small next to the standard errors.
            Assert.InRange(calibration.InterceptErrorBound, 0, 0.05 * calibration.InterceptStandardError);
            Assert.InRange(calibration.SlopeErrorBound, 0, 0.05 * calibration.SlopeStandardError);
            Assert.Equal(data.Value("cal_joint", "se_slope"), calibration.SlopeStandardError, 1e-3);

            // Groups merged from bins have exact sums, and the decomposition adds up.
            Assert.Equal(data.Labels.Length, scores.Reliability.Sum(g => g.Weight));
            Assert.Equal(data.Labels.Sum(), scores.Reliability.Sum(g => g.Positive));
            Assert.Equal(data.Probabilities.Sum(), scores.Reliability.Sum(g => g.Expected), 1e-9);
            Assert.Equal(data.Value("brier"), scores.BrierDecomposition.Brier, 1e-12);
            Assert.Equal(data.Value("murphy10", "unc"), scores.BrierDecomposition.Uncertainty, 1e-12);
            Assert.InRange(scores.Reliability.Length, 7, 10);
        }
    }

    [Theory]
    // Closed form of the Krichevsky-Trofimov predictor, -ln[Gamma(a+1/2) Gamma(b+1/2) / (pi n!)], computed with lgamma in extended precision.
    [InlineData(23, 7, 15.939286701814233)]
    [InlineData(10000, 1061, 3387.660473016411)]
    [InlineData(1460, 623, 1000.1237362104584)]
    public void CountLabel_LabelsInAnyOrder_BaseRateLogLossIsTheClosedForm(int labels, int ones, double logLoss)
    {
        foreach (int stride in new[] { 1, 7, 11 })
        {
            var run = new LedgerRun();
            for (int i = 0; i < labels; i++) run.Label(0, 0, (int)((long)i * stride % labels) < ones ? 1 : 0);
            var total = run.Snapshot.Total;
            Assert.Equal(1, total.BaseRateLogLoss * labels / logLoss, 1e-13);
            Assert.Equal(Math.Log(2), total.LogLoss, 1e-12);
        }
    }

    [Fact]
    public void Snapshot_WindowsOfTime_CountTheLabelsOfTheirMinutes()
    {
        var run = new LedgerRun(new HealthOptions { LastLabels = 2 });
        run.Label(0, 0, 1);
        run.Label(30 * Minute, 0, 1);
        run.Label(89 * Minute, 0, 0);
        var windows = run.Snapshot.Windows.ToDictionary(w => w.Name);
        Assert.Equal(2, windows["1h"].Figures.Count); // minutes 30 to 89
        Assert.Equal(30 * Minute, windows["1h"].FromMicroseconds);
        Assert.Equal(3, windows["1d"].Figures.Count);
        Assert.Equal(2, windows["last 2 labels"].Figures.Count);
        Assert.Null(windows["last 2 labels"].FromMicroseconds);
    }

    [Fact]
    public void Snapshot_WindowLongerThanTheMinutesKept_StartsAtAFullHour()
    {
        var run = new LedgerRun();
        run.Label(5 * Minute, 0, 1);
        run.Label((7 * 24 * 60 + 5) * Minute, 0, 0);
        var week = run.Snapshot.Windows.Single(w => w.Name == "7d");
        Assert.Equal((0, 2), (week.FromMicroseconds, week.Figures.Count));
        run.Label((7 * 24 * 60 + 60) * Minute, 0, 0);
        week = run.Snapshot.Windows.Single(w => w.Name == "7d");
        Assert.Equal((60 * Minute, 2), (week.FromMicroseconds, week.Figures.Count));
    }

    [Fact]
    public void Snapshot_HistoryOfDays_HoldsTheOpenHourToo()
    {
        var run = new LedgerRun();
        for (int hour = 0; hour < 60; hour++)
        {
            run.Label(hour * LedgerRun.Hour, 0, hour % 2);
            run.MoveTo(hour * LedgerRun.Hour + 30 * Minute);
            var (hours, days) = (run.Snapshot.History.Hours, run.Snapshot.History.Days);
            Assert.Equal(hour + 1, hours.Sum(point => point.Figures.Count));
            Assert.Equal(hour + 1, days.Sum(point => point.Figures.Count));
            Assert.Equal(hour / 24 + 1, days.Length);
            Assert.Equal(days.Select(point => point.FromMicroseconds).Order().Distinct(), days.Select(point => point.FromMicroseconds));
        }
    }

    [Fact]
    public void CountLabel_TenMillionLabelsOverYears_TakesNoMoreMemoryThanTwo()
    {
        const int Settled = 2_000_000, All = 10_000_000; // an event each half minute: after 694 days the rings are full but for a few days, after 3,472 long since
        var run = new LedgerRun(new HealthOptions { History = new HealthHistoryOptions { Days = 365 }, LabelsPerFalseAlarm = int.MaxValue });
        var random = new Detection.FixedStream(31);
        var blocks = new StateBlocks();
        Count(0, Settled);
        run.Ledger.Save(blocks);
        long settledBytes = Bytes(blocks), start = GC.GetAllocatedBytesForCurrentThread();

        Count(Settled, All);

        Assert.InRange(GC.GetAllocatedBytesForCurrentThread() - start, 0, 1 << 20);
        run.Ledger.Save(blocks);
        Assert.InRange(Bytes(blocks), 0.95 * settledBytes, 1.05 * settledBytes);
        Assert.Equal(All, run.Snapshot.Labelled);
        Assert.Equal(365, run.Snapshot.History.Days.Length - 1);

        void Count(int from, int to)
        {
            for (int i = from; i < to; i++)
            {
                double logOdds = -3 + 2 * random.Uniform();
                run.Label(i * Minute / 2, logOdds, random.Label(1 / (1 + Math.Exp(-logOdds))), delay: i % 3 * LedgerRun.Hour);
            }
        }

        static long Bytes(StateBlocks blocks) => blocks.Changes().Sum(change => (long)(change.Bytes?.Length ?? 0));
    }

    [Fact]
    public void CountLabel_ExtremeLogOdds_StaysFinite()
    {
        var run = new LedgerRun();
        run.Label(0, 800, 0);
        run.Label(0, -800, 1);
        run.Label(0, 0.3, 1);
        run.Label(0, 0.2, 0);
        var total = run.Snapshot.Total;
        Assert.Equal(1600 + Math.Log(1 + Math.Exp(-0.3)) + Math.Log(1 + Math.Exp(0.2)), total.LogLoss * 4, 1e-9);
        Assert.Equal(0.25, total.Scores.RocArea.Area, total.Scores.RocArea.ErrorBound + 1e-12);
        Assert.True(double.IsFinite(total.Scores.Calibration.Slope));
    }

    [Fact]
    public void CountLabel_Weights_CountAsThatManyLabels()
    {
        var weighted = new LedgerRun();
        var repeated = new LedgerRun();
        weighted.Label(0, -1.5, 1, 3);
        weighted.Label(0, 0.5, 0, 2);
        for (int i = 0; i < 3; i++) repeated.Label(0, -1.5, 1);
        for (int i = 0; i < 2; i++) repeated.Label(0, 0.5, 0);
        var (a, b) = (weighted.Snapshot.Total, repeated.Snapshot.Total);
        Assert.Equal(b.LogLoss, a.LogLoss, 1e-15);
        Assert.Equal(b.Brier, a.Brier, 1e-15);
        Assert.Equal(0.6, a.ObservedRate, 1e-15);
        Assert.Equal(b.Scores.RocArea.Area, a.Scores.RocArea.Area);
        Assert.Equal(25.0 / 13, a.EffectiveCount, 1e-15);
    }

    [Fact]
    public void CountLabel_RandomWeights_LogLossIntervalCoversTheTruth()
    {
        // The loss at p = 0.2 has mean 0.2 ln 5 + 0.8 ln 1.25, whatever the weights.
        double truth = 0.2 * Math.Log(5) + 0.8 * Math.Log(1.25), logOdds = Math.Log(0.25);
        int covered = 0;
        for (ulong seed = 1; seed <= 400; seed++)
        {
            var random = new Detection.FixedStream(seed);
            var run = new LedgerRun(new HealthOptions { LastLabels = 1 });
            for (int i = 0; i < 300; i++) run.Label(0, logOdds, random.Label(0.2), random.Uniform() < 0.2 ? 10 : 1);
            if (run.Snapshot.Total.LogLossInterval.Contains(truth)) covered++;
        }
        Assert.InRange(covered / 400.0, 0.90, 0.98);
    }

    [Fact]
    public void Promised_LabelsDrawnFromTheirProbabilities_FallIntoTheRangeAsOftenAsItSays()
    {
        int inside80 = 0, inside95 = 0;
        for (ulong seed = 1; seed <= 400; seed++)
        {
            var random = new Detection.FixedStream(5000 + seed);
            var run = new LedgerRun(new HealthOptions { LastLabels = 1 });
            for (int i = 0; i < 500; i++)
            {
                double p = 0.02 + 0.3 * random.Uniform();
                run.Label(0, Math.Log(p / (1 - p)), random.Label(p));
            }
            var promised = run.Snapshot.Total.Promised;
            if (promised.Range80.Contains(promised.Came)) inside80++;
            if (promised.Range95.Contains(promised.Came)) inside95++;
        }
        Assert.InRange(inside80 / 400.0, 0.75, 0.86);
        Assert.InRange(inside95 / 400.0, 0.92, 0.98);
    }

    [Fact]
    public void SaveAndLoad_InTheMiddle_ContinuesToTheSameBits()
    {
        var options = new HealthOptions { LastLabels = 700, History = new HealthHistoryOptions { Minutes = 60 } };
        var kept = new StateBlocks();
        var whole = new LedgerRun(options);
        var resumed = new LedgerRun(options);
        for (int i = 0; i < 5000; i++)
        {
            double logOdds = Math.Sin(i) * 3, weight = 1 + 0.1 * (i % 3);
            whole.Label(i * Minute / 7, logOdds, i % 3 == 0 ? 1 : 0, weight, delay: i % 5 * Minute);
            resumed.Label(i * Minute / 7, logOdds, i % 3 == 0 ? 1 : 0, weight, delay: i % 5 * Minute);
            if (i % 613 == 0) resumed.Resume(kept);
            if (i % 97 == 0) _ = resumed.Snapshot; // looking changes nothing
        }
        AssertSame(whole.Snapshot, resumed.Snapshot);
    }

    [Fact]
    public void Load_OtherRetentionAndWindow_KeepsWhatFits()
    {
        var kept = new StateBlocks();
        var run = new LedgerRun(new HealthOptions { LastLabels = 700, History = new HealthHistoryOptions { Minutes = 120 } });
        for (int i = 0; i < 5000; i++) run.Label(i * Minute / 7, Math.Sin(i), i % 3 == 0 ? 1 : 0);
        run.Ledger.Save(kept);
        var other = new LedgerRun(new HealthOptions { LastLabels = 300, History = new HealthHistoryOptions { Minutes = 90, Hours = 24 } });
        other.Ledger.Load(kept);
        other.MoveTo(4999 * Minute / 7);
        Assert.Equal(run.Snapshot.Total, other.Snapshot.Total);
        Assert.Equal(run.Snapshot.Windows[1].Figures, other.Snapshot.Windows[1].Figures); // 1 d, from hours
        Assert.Equal(300, other.Snapshot.Windows[^1].Figures.Count);
        Assert.Equal(90, other.Snapshot.History.Minutes.Length);
        Assert.Equal(run.Snapshot.History.Minutes.TakeLast(90).Select(p => p.Figures), other.Snapshot.History.Minutes.Select(p => p.Figures));

        // What is saved next can be taken up again, and the longer rings have left nothing behind.
        other.Resume(kept);
        Assert.Equal(run.Snapshot.Total, other.Snapshot.Total);
        Assert.Equal(90, kept.Read("health/stream/1m").Count());
    }

    [Theory]
    [InlineData(10)]
    [InlineData(1000)]
    public void CorrectLabel_AnyTimeLater_GivesTheFiguresOfTheFinalTruth(int labelsAfter)
    {
        var options = new HealthOptions { LastLabels = 500, History = new HealthHistoryOptions { Minutes = 60 } };
        var corrected = new LedgerRun(options);
        var truth = new LedgerRun(options);
        for (int i = 0; i < 300; i++)
        {
            corrected.Label(i * Minute, Math.Sin(i), i % 2);
            truth.Label(i * Minute, Math.Sin(i), i % 2);
        }
        var (wrong, count) = corrected.Label(301 * Minute, 0.7, 1, weight: 2);
        truth.Label(301 * Minute, 0.7, 0, weight: 2);
        for (int i = 0; i < labelsAfter; i++)
        {
            corrected.Label((302 + i) * Minute, Math.Cos(i), i % 3 == 0 ? 1 : 0);
            truth.Label((302 + i) * Minute, Math.Cos(i), i % 3 == 0 ? 1 : 0);
        }
        // Wrong again in between, and with another weight.
        count = corrected.Ledger.CorrectLabel(count, wrong with { Label = 0, Weight = 3 });
        count = corrected.Ledger.CorrectLabel(count, wrong with { Label = 1, Weight = 1.5 });
        corrected.Ledger.CorrectLabel(count, wrong with { Label = 0 });
        var (a, b) = (corrected.Snapshot, truth.Snapshot);
        AssertClose(b.Total, a.Total);
        foreach (var (x, y) in b.Windows.Zip(a.Windows)) AssertClose(x.Figures, y.Figures);
        Assert.Equal(b.History.Hours.Length, a.History.Hours.Length);
        foreach (var (x, y) in b.History.Hours.Zip(a.History.Hours)) AssertClose(x.Figures, y.Figures);
        Assert.Equal(3, a.Stream.Corrections);

        static void AssertClose(HealthFigures expected, HealthFigures got)
        {
            Assert.Equal(expected.Count, got.Count);
            Assert.Equal(expected.LogLoss, got.LogLoss, 1e-12);
            Assert.Equal(expected.LogLossStandardError, got.LogLossStandardError, 1e-9);
            Assert.Equal(expected.Brier, got.Brier, 1e-12);
            Assert.Equal(expected.ObservedRate, got.ObservedRate, 1e-12);
            Assert.Equal(expected.Spiegelhalter.Z, got.Spiegelhalter.Z, 1e-9);
            Assert.Equal(expected.Alerts.Promised.Came, got.Alerts.Promised.Came, 1e-9);
            Assert.Equal(expected.Scores.RocArea.Area, got.Scores.RocArea.Area, 1e-12);
            Assert.Equal(expected.Scores.Calibration.Slope, got.Scores.Calibration.Slope, 1e-9);
            // The base rate has gone on from the wrong label; each label after it moves by about 1/n.
            Assert.Equal(expected.BaseRateLogLoss, got.BaseRateLogLoss, 0.02);
        }
    }

    [Fact]
    public void Snapshot_LateLabels_TellsTheirDelaysWithinAQuarter()
    {
        var run = new LedgerRun();
        for (int i = 1; i <= 1000; i++) run.Label(i * Minute, 0, 0, delay: i * 1_000_000L);
        run.Label(1001 * Minute, 0, 0);
        var stream = run.Snapshot.Stream;
        Assert.Equal(1000, stream.LateLabels);
        Assert.Equal(500.5, stream.MeanDelaySeconds, 1e-9);
        foreach (double share in new[] { 0.01, 0.1, 0.5, 0.9, 0.99 })
            Assert.InRange(stream.LabelDelays.QuantileSeconds(share), 1000 * share * 0.8, 1000 * share * 1.25);
    }

    internal static void AssertSame(HealthSnapshot expected, HealthSnapshot got)
    {
        Assert.Equal(expected.Total, got.Total);
        Assert.Equal(expected.Stream, got.Stream);
        Assert.Equal(expected.Windows, got.Windows);
        Assert.Equal(expected.Cohorts, got.Cohorts);
        Assert.Equal(expected.Detectors, got.Detectors);
        Assert.Equal(expected.Changes, got.Changes);
        Assert.Equal(expected.Alarms, got.Alarms);
        Assert.Equal(expected.AlarmChanges, got.AlarmChanges);
        AssertSame(expected.History, got.History);
        Assert.Equal(expected.Slices.Length, got.Slices.Length);
        foreach (var (x, y) in expected.Slices.Zip(got.Slices))
        {
            Assert.Equal((x.Field, x.Value, x.Total), (y.Field, y.Value, y.Total));
            Assert.Equal(x.Windows, y.Windows);
            AssertSame(x.History, y.History);
        }
        foreach (var (x, y) in expected.Windows.Zip(got.Windows))
            if (x.Drift is not null) Assert.Equal(x.Drift.Features, y.Drift!.Features);
    }

    private static void AssertSame(HealthHistory expected, HealthHistory got)
    {
        foreach (var (x, y) in new[] { (expected.Minutes, got.Minutes), (expected.Hours, got.Hours), (expected.Days, got.Days) })
        {
            Assert.Equal(x.Select(p => (p.FromMicroseconds, p.LengthMicroseconds, p.Figures, p.Stream)), y.Select(p => (p.FromMicroseconds, p.LengthMicroseconds, p.Figures, p.Stream)));
            Assert.Equal(x.SelectMany(p => p.Settings), y.SelectMany(p => p.Settings));
        }
    }

    /// <summary>The figures of predictions counted as labels, over all time and over a window each of minutes, of hours and of the last labels.</summary>
    private static IEnumerable<HealthFigures> FiguresOf(Predictions data)
    {
        var run = new LedgerRun();
        for (int i = 0; i < data.Labels.Length; i++)
        {
            double p = data.Probabilities[i];
            run.Label(i * 10_000, Math.Log(p) - Math.Log(1 - p), data.Labels[i]);
        }
        var snapshot = run.Snapshot;
        return snapshot.Windows.Select(w => w.Figures).Append(snapshot.Total);
    }
}
