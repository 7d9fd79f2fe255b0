using CsCheck;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Tests.Records;

namespace StreamLogit.Engine.Tests.Learning;

public sealed class BlendTests
{
    private static readonly double[] Special = [-1e6, 1e6, -745.5, 745.5, 0, 1e30, -1e30];

    // Ordinary log-odds, and some that make every probability underflow.
    private static readonly Gen<double> LogOdds = Gen.Frequency(
        (6, Gen.Double[-5, 5]),
        (2, Gen.Double[-60, 60]),
        (1, Gen.Double[-2000, 2000]),
        (1, Gen.Int[0, Special.Length - 1].Select(i => Special[i])));

    private static readonly Gen<(double[] LogOdds, int Label, double Weight)[]> Streams =
        from settings in Gen.Int[1, 20]
        from stream in Gen.Select(LogOdds.Array[settings], Gen.Int[0, 1], Gen.Double[0, 1]).Array[1, 60]
        select stream;

    /// <summary>Cumulative log-loss of the blend &lt;= that of the best setting + ln(settings), with weights from 0 to 1, on arbitrary streams.</summary>
    [Fact]
    public void LogOdds_SwitchRateZero_NeverLosesMoreThanLnSettings() => Streams.Check(
        3000, seed: 11, stream => AssertGuarantee(stream[0].LogOdds.Length, stream.Length, (i, _) => stream[i]));

    /// <summary>The label always is the one that the blend thinks less likely, and the settings disagree in turn.</summary>
    [Theory]
    [InlineData(2)]
    [InlineData(7)]
    [InlineData(16)]
    [InlineData(64)]
    public void LogOdds_SwitchRateZeroAgainstAnAdversary_NeverLosesMoreThanLnSettings(int settings)
    {
        var random = new Random(settings);
        double scale = 1;
        AssertGuarantee(settings, 3000, (i, blend) =>
        {
            scale = i % 500 == 0 ? Math.Pow(10, i / 500 - 1) : scale;
            double[] logOdds = [.. Enumerable.Range(0, settings).Select(s => scale * (s == i % settings ? 3 : random.NextDouble() * 2 - 1))];
            return (logOdds, blend.LogOdds(logOdds) > 0 ? 0 : 1, 1);
        });
    }

    /// <summary>A setting that was far behind, so far that its weight underflows, comes back when the others fail by more.</summary>
    [Fact]
    public void LogOdds_SwitchRateZero_ForgetsNoSetting()
    {
        Blend blend = Blend.Create(2, 0, 8);
        for (int i = 0; i < 200; i++) blend.Learn([10, -10], 1, 1);
        for (int i = 0; i < 1000; i++) blend.Learn([10, -10], 0, 1);
        Assert.Equal(-10, blend.LogOdds([10, -10]), 1e-9);
    }

    /// <summary>Herbster &amp; Warmuth 1998, fixed share, straight from the definition.</summary>
    [Theory]
    [InlineData(1, 0.5)]
    [InlineData(3, 1e-4)]
    [InlineData(5, 0.01)]
    [InlineData(8, 1)]
    [InlineData(17, 0.1)]
    public void Learn_SwitchRate_IsFixedShare(int settings, double switchRate)
    {
        Blend blend = Blend.Create(settings, switchRate, 8);
        double[] weights = [.. Enumerable.Repeat(1.0 / settings, settings)], actual = new double[settings];
        var random = new Random(3);
        for (int i = 0; i < 500; i++)
        {
            double[] logOdds = [.. weights.Select(_ => random.NextDouble() * 8 - 4)];
            int label = random.Next(2);
            double s = i % 4 == 0 ? random.NextDouble() * 3 : 1;
            double mixed = weights.Zip(logOdds, (w, z) => w * PlainRules.Sigmoid(z)).Sum();
            Assert.Equal(Math.Log(mixed / (1 - mixed)), blend.LogOdds(logOdds), 1e-10);

            blend.Learn(logOdds, label, s);
            double[] posterior = [.. weights.Zip(logOdds, (w, z) => w * Math.Pow(PlainRules.Sigmoid(label == 1 ? z : -z), s))];
            weights = [.. posterior.Select(p => (1 - switchRate) * p / posterior.Sum() + switchRate / settings)];
            blend.Weights(actual);
            for (int k = 0; k < settings; k++) Assert.Equal(weights[k], actual[k], 1e-11);
        }
    }

    [Theory]
    [InlineData(0)]
    [InlineData(1e-300)]
    [InlineData(1e-4)]
    [InlineData(1)]
    public void LogOdds_ExtremeScores_StaysFinite(double switchRate)
    {
        Blend blend = Blend.Create(3, switchRate, 8);
        double[] weights = new double[3];
        double[][] scores = [[1e54, -1e54, 0], [800, 900, 1000], [-1e6, -1e7, -1e8], [0, 0, 0], [750, 750, -750]];
        for (int i = 0; i < 400; i++)
        {
            double[] logOdds = scores[i % scores.Length];
            double published = blend.LogOdds(logOdds);
            Assert.InRange(published, logOdds.Min() - 1e-9, logOdds.Max() + 1e-9);
            blend.Learn(logOdds, i / 3 % 2, i % 7 == 0 ? 1e6 : i % 2);
            blend.Weights(weights);
            Assert.Equal(1, weights.Sum(), 1e-9);
            Assert.All(weights, w => Assert.InRange(w, 0, 1));
        }
        Assert.True(double.IsFinite(blend.LogLossTotal(0)) && double.IsFinite(blend.BrierTotal(0)));
    }

    [Fact]
    public void Totals_Labels_AreWeightedSumsAndCanBeTakenBack()
    {
        foreach (int settings in new[] { 1, 3 })
        {
            Blend blend = Blend.Create(settings, 0, 8);
            double[] logOdds = [.. Enumerable.Repeat(0.7, settings)];
            double logLoss = 0, brier = 0;
            for (int i = 0; i < 20; i++)
            {
                blend.Learn(logOdds, i % 2, i);
                double p = PlainRules.Sigmoid(0.7);
                logLoss += i * (i % 2 == 1 ? -Math.Log(p) : -Math.Log(1 - p));
                brier += i * (p - i % 2) * (p - i % 2);
                Assert.Equal(logLoss, blend.LogLossTotal(settings - 1), 1e-10);
            }
            Assert.Equal((brier, 190.0), (blend.BrierTotal(settings - 1), blend.WeightTotal(settings - 1)), (a, b) => Math.Abs(a.Item1 - b.Item1) < 1e-10 && a.Item2 == b.Item2);
            for (int i = 0; i < 20; i++) blend.TakeBack(logOdds, i % 2, i);
            Assert.Equal(0, blend.LogLossTotal(settings - 1), 1e-10);
            Assert.Equal(0, blend.BrierTotal(settings - 1), 1e-10);
            Assert.Equal(0, blend.WeightTotal(settings - 1));
        }
    }

    private static void AssertGuarantee(int settings, int length, Func<int, Blend, (double[] LogOdds, int Label, double Weight)> next)
    {
        Blend blend = Blend.Create(settings, 0, 8);
        double loss = 0;
        for (int i = 0; i < length; i++)
        {
            (double[] logOdds, int label, double weight) = next(i, blend);
            loss += weight * BankStream.Loss(blend.LogOdds(logOdds), label);
            blend.Learn(logOdds, label, weight);
        }
        double best = Enumerable.Range(0, settings).Min(blend.LogLossTotal);
        Assert.True(loss <= best + Math.Log(settings) + 1e-9 * (1 + best), $"{loss} against {best} + ln {settings}");
    }
}
