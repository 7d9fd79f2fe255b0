using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine.Tests.Learning;

public sealed class BankTests
{
    private static readonly SettingOptions[] EveryRule =
    [
        new SgdSetting(0.1, 0, 1e-6), new SgdSetting(1e6, 0.3, 0.01) { IsOvershootProof = true, ForgetHalfLifeMicroseconds = 1 },
        new SgdSetting(1e6, 0, 1e3), new AdagradSetting(1e6, 0.5), new AdagradSetting(0.1, 0), new FtrlSetting(1e6, 1e-3, 1e3, 0),
        new FtrlSetting(0.1, 1, 0, 1) { ForgetHalfLifeMicroseconds = 100 }, new NewtonSetting(1, 1e6), new NewtonSetting(0.01, 1),
        new NewtonSetting(0.9, 1) { ForgetHalfLifeMicroseconds = 1 },
    ];

    /// <summary>The largest and smallest that a record may hold: values of 1e15, weights of 1e6, years between labels.</summary>
    [Fact]
    public void ScoreAndLearn_ExtremeRecords_StayFinite()
    {
        var bank = new Bank(BankStream.Options(EveryRule), 6, firstDenseSlot: 2);
        var random = new Random(9);
        double[] extremes = [1e15, -1e15, 1e-300, 5e-324, 0, 1, -1, 1e8];
        double[] weights = [0, 1e6, 1, 1e-300];
        double[] logOdds = new double[EveryRule.Length], coefficients = new double[6];
        for (int i = 0; i < 20_000; i++)
        {
            double[] values = [.. Enumerable.Range(0, 6).Select(_ => extremes[random.Next(extremes.Length)])];
            var x = new EncodedVector([0, 1, 2, 3, 4, 5], values);
            long time = i * (i % 100 == 0 ? 1_000_000_000_000 : 1);
            Assert.True(double.IsFinite(bank.Score(in x, time, logOdds)), $"label {i}");
            Assert.All(logOdds, z => Assert.True(double.IsFinite(z), $"label {i}"));
            bank.Learn(in x, logOdds, isFresh: i % 2 == 0, random.Next(2), weights[random.Next(weights.Length)], time);
            bank.PublishedCoefficients(in x, coefficients);
            Assert.All(coefficients, c => Assert.True(double.IsFinite(c), $"label {i}"));
        }
    }

    [Fact]
    public void ScoreAndLearn_WarmedUp_AllocateNothing()
    {
        var bank = new Bank(BankStream.Options(EveryRule) with { SwitchRate = 1e-3 }, 6, firstDenseSlot: 2);
        double[] values = [1, 0.5, -1, 2, 0.1, 3], coefficients = new double[6], logOdds = new double[EveryRule.Length];
        int[] slots = [0, 1, 2, 3, 4, 5];
        for (int i = 0; i < 2000; i++) Once(i);
        long least = long.MaxValue;
        for (int repeat = 0; repeat < 5; repeat++)
        {
            long before = GC.GetAllocatedBytesForCurrentThread();
            for (int i = 0; i < 10_000; i++) Once(i);
            // The runtime may allocate once when it replaces code by better code.
            least = Math.Min(least, GC.GetAllocatedBytesForCurrentThread() - before);
        }
        Assert.Equal(0, least);

        void Once(int i)
        {
            var x = new EncodedVector(slots, values);
            bank.Score(in x, i, logOdds);
            bank.PublishedCoefficients(in x, coefficients);
            bank.Learn(in x, logOdds, isFresh: i % 2 == 0, i % 2, i % 3, i);
        }
    }

    /// <summary>That nothing was learned since is worth time, but no bit.</summary>
    [Fact]
    public void Learn_FreshOrNot_GivesTheSameBits()
    {
        LabelledRow[] rows = RealStreams.Read("seattle");
        SettingOptions[] settings = [.. EveryRule.Take(5), .. EveryRule.Skip(7)];
        BankStream fresh = new(new Bank(BankStream.Options(settings), 5, 0), 5), stale = new(new Bank(BankStream.Options(settings), 5, 0), 5);
        foreach (LabelledRow row in rows)
            Assert.Equal(fresh.Next(row.Values, row.Label), stale.Next(row.Values, row.Label, isFresh: false));
    }

    [Theory]
    [InlineData(-1)]
    [InlineData(5)]
    [InlineData(int.MaxValue)]
    public void ScoreAndLearn_SlotOutside_Throws(int slot)
    {
        var bank = new Bank(BankStream.Options(new SgdSetting(0.1, 0, 0)), 5);
        int[] slots = [0, 1, 2, 3, 4, slot, 0];
        double[] values = new double[7], logOdds = new double[1];
        Assert.Throws<ArgumentOutOfRangeException>(() => bank.Score(new EncodedVector(slots, values), 0, logOdds));
        Assert.Throws<ArgumentOutOfRangeException>(() => bank.Learn(new EncodedVector(slots, values), logOdds, true, 1, 1, 0));
        Assert.Throws<ArgumentOutOfRangeException>(() => bank.PublishedCoefficients(new EncodedVector(slots, values), new double[7]));
    }

    [Fact]
    public void Score_PublishedSetting_IsThatSettings()
    {
        SettingOptions[] settings = [new SgdSetting(0.1, 0, 0), new AdagradSetting(0.1, 0)];
        var bank = new Bank(BankStream.Options(settings) with { PublishedSetting = settings[1].Name }, 2);
        var learner = new BankStream(bank, 2);
        double[] coefficients = new double[2];
        for (int i = 0; i < 20; i++) Assert.Equal(learner.Next([1, i % 2], i % 2), learner.LogOdds[1]);
        bank.PublishedCoefficients(new EncodedVector([0, 1], [1, 1]), coefficients);
        Assert.Equal([bank.Coefficient(0, 1), bank.Coefficient(1, 1)], coefficients);
        Assert.Throws<ArgumentException>(() => new Bank(BankStream.Options(settings) with { PublishedSetting = "none" }, 2));
    }

    [Fact]
    public void PublishedCoefficients_Blend_AreTheWeightedMeans()
    {
        var bank = new Bank(BankStream.Options(EveryRule[..1]) with { Bank = [.. EveryRule[..1], new AdagradSetting(0.3, 0), new FtrlSetting(0.2, 1, 0, 0), new NewtonSetting(1, 1)] }, 3, 1);
        var learner = new BankStream(bank, 3);
        var random = new Random(2);
        for (int i = 0; i < 50; i++) learner.Next([1, random.NextDouble(), random.NextDouble()], random.Next(2));
        double[] coefficients = new double[3];
        bank.PublishedCoefficients(new EncodedVector([2, 0, 1], [1, 1, 1]), coefficients);
        int[] slots = [2, 0, 1];
        for (int i = 0; i < 3; i++)
            Assert.Equal(Enumerable.Range(0, 4).Sum(s => bank.BlendWeight(s) * bank.Coefficient(slots[i], s)), coefficients[i], 1e-14);
        Assert.Equal(1, Enumerable.Range(0, 4).Sum(bank.BlendWeight), 1e-14);
    }

    [Fact]
    public void NonZeroCount_FtrlWithL1_HasExactZeros()
    {
        var bank = new Bank(BankStream.Options(new FtrlSetting(0.1, 1, 1e9, 0), new FtrlSetting(0.1, 1, 3, 0), new FtrlSetting(0.1, 1, 0, 0)), 5);
        var learner = new BankStream(bank, 5);
        foreach (LabelledRow row in RealStreams.Read("seattle")) learner.Next(row.Values, row.Label);
        Assert.Equal(0, bank.NonZeroCount(0));
        Assert.InRange(bank.NonZeroCount(1), 1, 4);
        Assert.Equal(5, bank.NonZeroCount(2));
        Assert.Equal(bank.NonZeroCount(1), Enumerable.Range(0, 5).Count(slot => bank.Coefficient(slot, 1) != 0));
        Assert.NotEqual(0, bank.Intercept(0));
    }

    [Fact]
    public void StartFrom_Coefficients_AreWhereTheBankStartsAndWhatItForgetsTo()
    {
        SettingOptions[] settings =
        [
            new SgdSetting(0.1, 0, 0) { ForgetHalfLifeMicroseconds = 1000 }, new AdagradSetting(0.1, 0) { ForgetHalfLifeMicroseconds = 1000 },
            new FtrlSetting(0.1, 1, 0.01, 0) { ForgetHalfLifeMicroseconds = 1000 }, new NewtonSetting(1, 1) { ForgetHalfLifeMicroseconds = 1000 },
            new SgdSetting(0.1, 0, 0),
        ];
        var bank = new Bank(BankStream.Options(settings), 3, 0);
        bank.StartFrom(-1, [0.5, -2, 0]);
        var learner = new BankStream(bank, 3);
        learner.Next([1, 2, 3], 1, timeMicroseconds: 1);
        double moderated = -4.5 / Math.Sqrt(1 + Math.PI / 8 * (1 + 1 + 4 + 9));
        Assert.Equal([-4.5, -4.5, -4.5, moderated, -4.5], learner.LogOdds, (a, b) => Math.Abs(a - b) < 1e-12);
        Assert.All(Enumerable.Range(0, 5), s => Assert.True(bank.Coefficient(2, s) > 0.05));

        learner.Next([0, 0, 0], 1, weight: 0, timeMicroseconds: 1_000_000);
        for (int s = 0; s < 4; s++) Assert.Equal([0.5, -2, 0], new[] { 0, 1, 2 }.Select(slot => bank.Coefficient(slot, s)), (a, b) => Math.Abs(a - b) < 1e-12);
        Assert.NotEqual(-2, bank.Coefficient(1, 4));
    }

    [Fact]
    public void StartProbability_NothingLearned_IsThePublishedProbability()
    {
        var bank = new Bank(BankStream.Options(EveryRule) with { StartProbability = 0.01 }, 6, 2);
        double z = bank.Score(new EncodedVector([], []), 0, new double[EveryRule.Length]);
        // newton moderates by the variance of its intercept.
        Assert.Equal(Math.Log(0.01 / 0.99), bank.Intercept(0), 1e-12);
        Assert.InRange(z, Math.Log(0.01 / 0.99), 0);
    }

    [Fact]
    public void Names_Settings_AreCanonical()
    {
        ImmutableArray<SettingOptions> settings =
        [
            new SgdSetting(0.01, 0, 1e-6), new SgdSetting(0.01, 0, 0) { IsOvershootProof = true },
            new SgdSetting(0.01, 0, 0) { ForgetHalfLifeMicroseconds = 7 * 86_400_000_000 }, new AdagradSetting(0.5, 1000),
            new FtrlSetting(0.1, 1, 0, 0.25), new NewtonSetting(0.999, 1) { ForgetHalfLifeMicroseconds = 1_500 },
        ];
        Assert.Equal(
            [
                "sgd step=0.01 stepDecay=0 weightDecay=1E-06", "sgd step=0.01 stepDecay=0 weightDecay=0 overshootProof",
                "sgd step=0.01 stepDecay=0 weightDecay=0 forget=1w", "adagrad step=0.5 sumHalfLife=1000",
                "ftrl step=0.1 beta=1 l1=0 l2=0.25", "newton forgetting=0.999 prior=1 forget=1.5ms",
            ],
            settings.Select(setting => setting.Name));
        foreach (ImmutableArray<SettingOptions> bank in new[] { DefaultBank.Settings, DefaultBank.DenseSettings })
            Assert.Equal(16, bank.Select(setting => setting.Name).Distinct().Count());
    }
}
