using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Tests.Features.Histories;

public class DistinctTests
{
    private const long HalfLife = 3_600_000_000;

    private static readonly HistoryFeature Shops =
        new(HistoryKind.Distinct, ["card"]) { Of = "shop", HalfLifeMicroseconds = HalfLife, Span = "1h", Scale = NumberScale.None };

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    public void Distinct_FewValues_IsExactButForTheCutOfTimes(int seed)
    {
        var run = new HistoryRun([Shops]);
        var oracle = new HistoryOracle();
        foreach (var step in RandomStream.Steps(seed, cards: 40, events: 2000).Where(s => s.Label is null))
        {
            double got = run.Encode(step.Event.Json())[0];
            if (oracle.Figure(Shops, step.Event) is { } expected) Assert.Equal(expected, got, 0.0015 * expected + 1e-12);
            else Assert.True(double.IsNaN(got));
            oracle.Add([Shops], step.Event);
        }
    }

    [Theory]
    [InlineData(32, 200, 0)]
    [InlineData(32, 200, 2)]
    [InlineData(64, 300, 1)]
    public void Distinct_ThousandKeysWithManyValues_AreWithinTheStatedError(int kept, int values, double halfLivesOld)
    {
        var run = new HistoryRun([Shops with { Values = kept }]);
        int within = 0;
        double squares = 0, errors = 0, standardError = 1 / Math.Sqrt(kept - 2);
        for (int card = 0; card < 1000; card++)
        {
            double exact = 0;
            long start = 1_767_225_600_000_000, end = start + (long)(halfLivesOld * HalfLife);
            for (int value = 0; value < values; value++)
            {
                // Each value is seen twice; only the later time counts.
                long later = end - (long)((end - start) * (double)value / values);
                run.Encode(new PastEvent($"c{card}", $"s{card}-{value}", null, start).Json());
                run.Encode(new PastEvent($"c{card}", $"s{card}-{value}", null, later).Json());
                exact += Math.Pow(2, -(double)(end - later) / HalfLife);
            }
            double ratio = run.Encode(new PastEvent($"c{card}", null, null, end).Json())[0] / exact;
            if (Math.Abs(ratio - 1) < 3 * standardError) within++;
            errors += ratio - 1;
            squares += (ratio - 1) * (ratio - 1);
        }
        Assert.InRange(within, 990, 1000);
        Assert.InRange(Math.Sqrt(squares / 1000), 0, 1.08 * standardError); // the sampling error of 1,000 runs is 2.2 %
        Assert.InRange(errors / 1000, -3.5 * standardError / Math.Sqrt(1000), 3.5 * standardError / Math.Sqrt(1000)); // no bias
    }

    [Fact]
    public void Distinct_AfterALongPause_IsNothing()
    {
        var run = new HistoryRun([Shops]);
        for (int i = 0; i < 100; i++) run.Encode(new PastEvent("c", $"s{i}", null, 0).Json());
        Assert.InRange(run.Encode(new PastEvent("c", "s", null, 30 * HalfLife).Json())[0], 1e-9, 1e-6);
        Assert.Equal(0.0, run.Encode(new PastEvent("c", "s", null, 200 * HalfLife).Json())[0]);
        Assert.Equal(1.0, run.Encode(new PastEvent("c", "s", null, 200 * HalfLife).Json())[0]);
    }
}
