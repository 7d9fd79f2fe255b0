using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Health.Detection;

public class ChangeDetectorsTests
{
    private const int LabelsPerFalseAlarm = 20_000;

    [Fact]
    public void Changes_200StationaryStreams_AreAtMostAsManyAsAskedFor()
    {
        const int Streams = 200, Length = 20_000;
        long fired = 0;
        for (ulong stream = 1; stream <= Streams; stream++)
        {
            var run = Start();
            var random = new FixedStream(stream);
            for (int i = 0; i < Length; i++) Add(run, random, i, oddsRatio: 1);
            fired += run.Snapshot.Detectors.Sum(d => d.Fired);
        }
        double asked = (double)Streams * Length / LabelsPerFalseAlarm;
        TestContext.Current.TestOutputHelper?.WriteLine($"{fired} false alarms, {asked} asked for");
        Assert.True(fired <= asked, $"{fired} false alarms, {asked} asked for");
    }

    [Fact]
    public void Changes_BaseRateDoubles_AreFoundSoonAndSaySinceWhen()
    {
        const int Before = 10_000;
        var delays = new List<int>();
        var sinceErrors = new List<long>();
        for (ulong stream = 1; stream <= 100; stream++)
        {
            var run = Start();
            var random = new FixedStream(9000 + stream);
            for (int i = 0; i < Before; i++) Add(run, random, i, oddsRatio: 1);
            long number = run.Snapshot.Changes.FirstOrDefault()?.Number ?? 0;
            int after = 0;
            while (after < 20_000)
            {
                for (int i = 0; i < 100; i++) Add(run, random, Before + after++, oddsRatio: 2);
                if (run.Snapshot.Changes.FirstOrDefault() is not { } change || change.Number == number) continue;
                delays.Add(after);
                sinceErrors.Add(change.SinceLabel - Before);
                Assert.Equal("odds higher", change.Detector);
                Assert.True(change.After > change.Before);
                Assert.Contains("were promised to be bad", change.Sentence, StringComparison.Ordinal);
                Assert.InRange(change.SinceMicroseconds, 0, change.AtMicroseconds);
                break;
            }
        }
        // About 5 % of labels are 1; odds that are twice as high give 0.3 nats for each 20 labels, and ln(3 * 20,000 / 32) = 7.5 must be reached.
        Assert.Equal(100, delays.Count);
        TestContext.Current.TestOutputHelper?.WriteLine(FormattableString.Invariant(
            $"found after {delays.Average():F0} labels on average, after {delays.Order().ElementAt(94)} in 95 of 100; the start is told {sinceErrors.Average():F0} labels late on average"));
        Assert.InRange(delays.Average(), 100, 1200);
        Assert.InRange(delays.Order().ElementAt(94), 100, 2500);
        Assert.InRange(sinceErrors.Average(), -800, 400);
    }

    [Fact]
    public void Changes_OddsHalve_AreFound()
    {
        var run = Start();
        var random = new FixedStream(77);
        for (int i = 0; i < 10_000; i++) Add(run, random, i, oddsRatio: 1);
        long number = run.Snapshot.Changes.FirstOrDefault()?.Number ?? 0;
        for (int i = 10_000; i < 16_000; i++) Add(run, random, i, oddsRatio: 0.5);
        Assert.Contains(run.Snapshot.Changes, c => c.Number > number && c.Detector == "odds lower" && c.After < c.Before);
    }

    [Fact]
    public void Changes_LogLossRisesWithCalibratedProbabilities_AreFoundByTheAdaptiveWindow()
    {
        // The probabilities hold throughout, but become less sure: only the mean log-loss changes.
        var run = Start();
        var random = new FixedStream(78);
        for (int i = 0; i < 20_000; i++)
        {
            double p = i < 10_000 ? 0.02 : 0.2;
            run.Label(i, Math.Log(p / (1 - p)), random.Label(p));
        }
        var change = Assert.Single(run.Snapshot.Changes);
        Assert.Equal("log-loss", change.Detector);
        Assert.InRange(change.SinceLabel, 9_000, 11_000);
        Assert.InRange(change.AtLabel, 10_000, 11_000);
        Assert.Equal(0.098, change.Before, 0.01); // the entropy of 0.02 in nats
    }

    [Fact]
    public void Changes_FirstLabels_AreNotLookedAt()
    {
        var run = new LedgerRun(new HealthOptions { LabelsPerFalseAlarm = LabelsPerFalseAlarm, DetectAfterLabels = 5_000 });
        var random = new FixedStream(79);
        for (int i = 0; i < 5_000; i++) Add(run, random, i, oddsRatio: 5);
        Assert.Empty(run.Snapshot.Changes);
        for (int i = 0; i < 5_000; i++) Add(run, random, i, oddsRatio: 5);
        Assert.NotEmpty(run.Snapshot.Changes);
    }

    [Fact]
    public void SaveAndLoad_InTheMiddle_FindsTheSameChanges()
    {
        var whole = Start();
        var resumed = Start();
        var kept = new StateBlocks();
        FixedStream one = new(80), two = new(80);
        for (int i = 0; i < 12_000; i++)
        {
            Add(whole, one, i, i < 6_000 ? 1 : 3);
            Add(resumed, two, i, i < 6_000 ? 1 : 3);
            if (i % 1001 == 0) resumed.Resume(kept);
        }
        Assert.NotEmpty(whole.Snapshot.Changes);
        HealthLedgerTests.AssertSame(whole.Snapshot, resumed.Snapshot);
    }

    private static LedgerRun Start() => new(new HealthOptions { LabelsPerFalseAlarm = LabelsPerFalseAlarm, DetectAfterLabels = 0, LastLabels = 1 });

    /// <summary>A label drawn with the odds of its published probability times a ratio; published probabilities spread around 4 %.</summary>
    private static void Add(LedgerRun run, FixedStream random, long time, double oddsRatio)
    {
        double logOdds = -3.5 + random.Normal();
        run.Label(time, logOdds, random.Label(1 / (1 + Math.Exp(-logOdds) / oddsRatio)));
    }
}
