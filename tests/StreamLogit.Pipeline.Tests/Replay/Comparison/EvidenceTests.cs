using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Tests.Replay.Comparison;

public sealed class EvidenceTests
{
    private const int NullPairs = 1000;
    private const int Labels = 5000;

    [Theory]
    [InlineData(NullPair.FreshErrors)]
    [InlineData(NullPair.ErrorsThatLast)]
    [InlineData(NullPair.RareOnes)]
    [InlineData(NullPair.ReferenceIsBetter)]
    public void Better_VariantIsNot_RarelyReachesTwentyHoweverOftenSomebodyLooks(NullPair kind)
    {
        int reached = 0;
        for (int pair = 0; pair < NullPairs; pair++)
            if (RunNull(kind, pair) is { ReachedTwentyAtMicroseconds: not null }) reached++;
        TestContext.Current.TestOutputHelper?.WriteLine($"{reached} of {NullPairs}");
        Assert.InRange(reached / (double)NullPairs, 0, 0.05);
    }

    [Fact]
    public void Better_VariantIsBetter_ReachesTwenty()
    {
        // 8,640 labels; the errors of the variant are 0.7 times those of the reference.
        int reached = 0, wrong = 0;
        for (int run = 0; run < 100; run++)
        {
            var comparer = new VariantComparer(["reference", "variant"], new ComparisonOptions { CompareAuc = false, Resamples = 100 });
            new SimulatedPair(run, 0.5, 0.35).Run(
                60, 6, (a, b, _, label, time) => comparer.Add([a, b], label, 1, time, time, []));
            var variant = comparer.Result().Variants[0];
            if (variant.Better.ReachedTwentyAtMicroseconds is not null) reached++;
            if (variant.Worse.ReachedTwentyAtMicroseconds is not null) wrong++;
        }
        TestContext.Current.TestOutputHelper?.WriteLine($"{reached} of 100, {wrong} the wrong way");
        Assert.InRange(reached, 90, 100);
        Assert.InRange(wrong, 0, 5);
    }

    [Fact]
    public void Evidence_VariantsChangePlaces_MirrorsBetterAndWorse()
    {
        var one = new VariantComparer(["a", "b"], new ComparisonOptions { CompareAuc = false });
        var other = new VariantComparer(["b", "a"], new ComparisonOptions { CompareAuc = false });
        new SimulatedPair(5, 0.5, 0.4).Run(20, 6, (a, b, _, label, time) =>
        {
            one.Add([a, b], label, 1, time, time, []);
            other.Add([b, a], label, 1, time, time, []);
        });
        var (x, y) = (one.Result().Variants[0], other.Result().Variants[0]);
        Assert.Equal(x.Better, y.Worse);
        Assert.Equal(x.Worse, y.Better);
        Assert.NotEqual(0, x.Better.LogEValue);
    }

    [Fact]
    public void Add_TheSameGainAgain_StakesItsInverseWithinTheLimit()
    {
        // Every stake is mean / mean square = 1 / 0.1, but no more than half of the wealth may be lost: 0.5 / 0.3.
        var evidence = new BettingEvidence(1);
        for (int i = 0; i < 25; i++) evidence.Add(0, 0.1, -0.3, i);
        Assert.Equal(5 * Math.Log(1 + 0.5 / 0.3 * 0.1), evidence.Better(0).LogEValue, 1e-12);
        Assert.Equal(0, evidence.Worse(0).LogEValue);
        Assert.Equal(evidence.Better(0).LogEValue, evidence.Better(0).LogPeak);
        Assert.Null(evidence.Better(0).ReachedTwentyAtMicroseconds);
        for (int i = 25; i < 60; i++) evidence.Add(0, 0.1, -0.3, i);

        // (1 + 1/6)^n passes 20 with n = 20, the label after 39.
        Assert.Equal(39, evidence.Better(0).ReachedTwentyAtMicroseconds);
    }

    [Fact]
    public void Multiply_FarOutOfTheRangeOfADouble_KeepsTheLogarithm()
    {
        var wealth = Wealth.One;
        for (int i = 0; i < 3000; i++) wealth.Multiply(0.5, i);
        for (int i = 0; i < 5000; i++) wealth.Multiply(2, 3000 + i);
        for (int i = 0; i < 1000; i++) wealth.Multiply(0.5, 8000 + i);
        var evidence = wealth.ToEvidence();
        Assert.Equal(1000 * Math.Log(2), evidence.LogEValue, 1e-9);
        Assert.Equal(2000 * Math.Log(2), evidence.LogPeak, 1e-9);

        // 2^5 is the first power above 20, after 3000 + 5 doublings.
        Assert.Equal(6004, evidence.ReachedTwentyAtMicroseconds);
    }

    public enum NullPair
    {
        FreshErrors,
        ErrorsThatLast,
        RareOnes,
        ReferenceIsBetter,
    }

    // Whatever the two say, the label is drawn so that neither is expected to gain on it: with the probability at which their expected log-losses are equal.
    private static Evidence RunNull(NullPair kind, int seed)
    {
        var comparer = new VariantComparer(["reference", "variant"], new ComparisonOptions { CompareAuc = false, Resamples = 100 });
        var random = new SimulatedPair(seed, 0, 0);
        var labels = new Random(seed + 100_000);
        double lasting = 0;
        int lastLabel = 0;
        for (int i = 0; i < Labels; i++)
        {
            lasting = 0.99 * lasting + 0.14 * random.Gauss();
            double middle = (kind == NullPair.RareOnes ? -5 : -1) + random.Gauss();

            // Errors that last depend on what was seen before, too: whoever bets may learn from that, in vain.
            double gap = kind == NullPair.ErrorsThatLast ? lasting + 0.3 * lastLabel : 0.6 * random.Gauss();
            double reference = middle - gap, variant = middle + 0.7 * gap;
            double ofOne = Softplus(-reference) - Softplus(-variant), ofZero = Softplus(reference) - Softplus(variant);
            double rate = ofOne == ofZero ? 0.5 : ofZero / (ofZero - ofOne);
            if (kind == NullPair.ReferenceIsBetter) rate = 0.8 * rate + 0.2 / (1 + Math.Exp(-reference));
            lastLabel = labels.NextDouble() < rate ? 1 : 0;
            comparer.Add([reference, variant], lastLabel, 1, i, i, []);
        }
        return comparer.Result().Variants[0].Better;
    }

    private static double Softplus(double x) => Math.Max(0, x) + Math.Log(1 + Math.Exp(-Math.Abs(x)));
}
