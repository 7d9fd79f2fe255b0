using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Tests.Replay.Comparison;

public sealed class IntervalCoverageTests
{
    private const int Pairs = 1000;

    [Theory]
    [InlineData(40, 6)]
    [InlineData(12, 12)]
    public void Result_EquallyGoodForecasters_NinetyPercentIntervalsHoldZeroAsOften(int days, int eventsPerHour)
    {
        int[] held = new int[4];
        for (int pair = 0; pair < Pairs; pair++)
        {
            var comparer = new VariantComparer(["a", "b"], new ComparisonOptions { Seed = (ulong)pair, Resamples = 400, Cost = DecisionCost.OfCutoff(0.3) });
            new SimulatedPair(1000 + pair, 0.5, 0.5).Run(
                days, eventsPerHour, (a, b, _, label, time) => comparer.Add([a, b], label, 1, time, time, []));
            var variant = comparer.Result().Variants[0];
            Difference[] differences = [variant.Losses.LogLoss, variant.Losses.Brier, variant.Losses.Cost, variant.Auc];
            for (int i = 0; i < 4; i++)
                if (differences[i].Low <= 0 && differences[i].High >= 0) held[i]++;
        }
        TestContext.Current.TestOutputHelper?.WriteLine(string.Join(" ", held.Select(h => h / (double)Pairs)));
        Assert.All(held, h => Assert.InRange(h / (double)Pairs, 0.86, 0.94));
    }
}
