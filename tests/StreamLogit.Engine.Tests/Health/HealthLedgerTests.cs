using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Health;

public class HealthLedgerTests
{
    private const long Minute = 60_000_000;

    [Theory]
    // Log-loss and Brier score of out-of-sample predictions: R 4.2.2 (glm) and scikit-learn 1.2.1 (log_loss, brier_score_loss), which agree to 1e-15.
    [InlineData("pred_birdstrikes_last5000_outofsample.csv", 0.2988048795132183, 0.08549153698101791)]
    [InlineData("pred_seattle_rest_outofsample.csv", 0.5553979939204259, 0.187423978756774)]
    public void CountLabel_PublishedPredictions_GivesLogLossAndBrierOfRAndScikitLearn(string file, double logLoss, double brier)
    {
        var ledger = new HealthLedger(new HealthOptions());
        foreach (double[] row in TestData.Columns(file, "p", "y"))
            ledger.CountLabel(0, Math.Log(row[0]) - Math.Log(1 - row[0]), (int)row[1], weight: 1);
        var total = ledger.Snapshot(0).Total;
        Assert.Equal(logLoss, total.LogLoss, 1e-12);
        Assert.Equal(brier, total.Brier, 1e-12);
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
            var ledger = new HealthLedger(new HealthOptions());
            for (int i = 0; i < labels; i++) ledger.CountLabel(0, 0, (int)((long)i * stride % labels) < ones ? 1 : 0, weight: 1);
            var total = ledger.Snapshot(0).Total;
            Assert.Equal(1, total.BaseRateLogLoss * labels / logLoss, 1e-13);
            Assert.Equal(Math.Log(2), total.LogLoss, 1e-12);
        }
    }

    [Fact]
    public void Snapshot_WindowsOfTime_CountTheLabelsOfTheirMinutes()
    {
        var ledger = new HealthLedger(new HealthOptions { LastLabels = 2 });
        ledger.CountLabel(0, 0, 1, 1);
        ledger.CountLabel(30 * Minute, 0, 1, 1);
        ledger.CountLabel(89 * Minute, 0, 0, 1);
        var windows = ledger.Snapshot(89 * Minute + 1).Windows.ToDictionary(w => w.Name, w => w.Figures.Count);
        Assert.Equal(2, windows["1h"]); // minutes 30 to 89
        Assert.Equal(3, windows["1d"]);
        Assert.Equal(2, windows["last 2 labels"]);
    }

    [Fact]
    public void Snapshot_AfterALongSilence_DropsOldMinutes()
    {
        var ledger = new HealthLedger(new HealthOptions());
        ledger.CountLabel(5 * Minute, 0, 1, 1);
        ledger.CountLabel((7 * 24 * 60 + 5) * Minute, 0, 0, 1); // the same place in the ring, a week later
        var week = ledger.Snapshot((7 * 24 * 60 + 5) * Minute).Windows.Single(w => w.Name == "7d").Figures;
        Assert.Equal(1, week.Count);
        Assert.Equal(0, week.ObservedRate);
    }

    [Fact]
    public void CountLabel_ExtremeLogOdds_StaysFinite()
    {
        var ledger = new HealthLedger(new HealthOptions());
        ledger.CountLabel(0, 800, 0, 1);
        ledger.CountLabel(0, -800, 1, 1);
        Assert.Equal(800, ledger.Snapshot(0).Total.LogLoss, 1e-9);
    }

    [Fact]
    public void CountLabel_Weights_CountAsThatManyLabels()
    {
        var weighted = new HealthLedger(new HealthOptions());
        var repeated = new HealthLedger(new HealthOptions());
        weighted.CountLabel(0, -1.5, 1, 3);
        weighted.CountLabel(0, 0.5, 0, 2);
        for (int i = 0; i < 3; i++) repeated.CountLabel(0, -1.5, 1, 1);
        for (int i = 0; i < 2; i++) repeated.CountLabel(0, 0.5, 0, 1);
        var (a, b) = (weighted.Snapshot(0).Total, repeated.Snapshot(0).Total);
        Assert.Equal(b.LogLoss, a.LogLoss, 1e-15);
        Assert.Equal(b.Brier, a.Brier, 1e-15);
        Assert.Equal(0.6, a.ObservedRate, 1e-15);
    }

    [Fact]
    public void SaveAndLoad_InTheMiddle_ContinuesToTheSameBits()
    {
        var kept = new StateBlocks();
        var whole = new HealthLedger(new HealthOptions { LastLabels = 700 });
        var resumed = new HealthLedger(new HealthOptions { LastLabels = 700 });
        for (int i = 0; i < 5000; i++)
        {
            double logOdds = Math.Sin(i) * 3;
            whole.CountLabel(i * Minute / 7, logOdds, i % 3 == 0 ? 1 : 0, 1);
            resumed.CountLabel(i * Minute / 7, logOdds, i % 3 == 0 ? 1 : 0, 1);
            if (i % 613 != 0) continue;
            resumed.Save(kept);
            resumed = new HealthLedger(new HealthOptions { LastLabels = 700 });
            resumed.Load(kept);
        }
        Assert.Equal(whole.Snapshot(5000 * Minute / 7).Total, resumed.Snapshot(5000 * Minute / 7).Total);
        Assert.Equal(whole.Snapshot(5000 * Minute / 7).Windows, resumed.Snapshot(5000 * Minute / 7).Windows);
    }
}
