using StreamLogit.Engine.Health.Detection;
using StreamLogit.Engine.Tests.Health.Metrics;

namespace StreamLogit.Engine.Tests.Health.Detection;

public class CusumTests
{
    [Fact]
    public void TabularCusum_MontgomeryRungerTable16_8_GivesItsSums()
    {
        // Montgomery & Runger, Applied Statistics and Probability for Engineers, table 16-8: target 99, K = 1, H = 10; no signal.
        var table = HealthReference.Root.GetProperty("montgomery_cusum");
        var cusum = new TabularCusum(table.GetProperty("target").GetDouble(), table.GetProperty("K").GetDouble(), table.GetProperty("H").GetDouble());
        foreach (var (x, sums) in table.GetProperty("x").Numbers().Zip(table.GetProperty("SH_SL").EnumerateArray()))
        {
            Assert.Equal(0, cusum.Add(x));
            Assert.Equal(sums[0].GetDouble(), cusum.Upper, 1e-10);
            Assert.Equal(sums[1].GetDouble(), cusum.Lower, 1e-10);
        }
    }

    [Fact]
    public void TabularCusum_ShiftOfTheMean_SignalsItsSideAndSaysSinceWhen()
    {
        var cusum = new TabularCusum(target: 0, allowance: 0.5, decisionInterval: 4);
        for (int i = 0; i < 50; i++) Assert.Equal(0, cusum.Add(i % 2 == 0 ? 0.4 : -0.4));
        int signal = 0, after = 0;
        while (signal == 0)
        {
            signal = cusum.Add(-2);
            after++;
        }
        Assert.Equal(-1, signal);
        Assert.Equal(3, after); // 1.5 a step beyond 4
        Assert.Equal(3, cusum.SinceLowerWasZero);
        cusum.Reset();
        Assert.Equal(0, cusum.Lower);
    }

    [Fact]
    public void CusumRunLength_AllOfTheTable_IsThatOfSpc()
    {
        foreach (var row in HealthReference.Root.GetProperty("arl_cusum").EnumerateArray())
        {
            double k = row.GetProperty("k").GetDouble(), h = row.GetProperty("h").GetDouble(), mean = row.GetProperty("mu").GetDouble();
            Assert.Equal(1, CusumRunLength.OneSided(k, h, mean) / row.GetProperty("one").GetDouble(), 1e-7);
            Assert.Equal(1, CusumRunLength.TwoSided(k, h, mean) / row.GetProperty("two").GetDouble(), 1e-7);
        }
    }

    [Theory]
    // R package spc 0.6.7, xcusum.arl(k, h, 0, sided = "one").
    [InlineData(0.5, 4, 335.367577627232)]
    [InlineData(0.5, 5, 930.887012064196)]
    public void TabularCusum_SimulatedRunLength_IsWithinTwoStandardErrorsOfSpc(double k, double h, double runLength)
    {
        const int Runs = 4000;
        var random = new FixedStream(7);
        double sum = 0, squares = 0;
        for (int run = 0; run < Runs; run++)
        {
            var cusum = new TabularCusum(0, k, h);
            int length = 0;
            do
            {
                length++;
                cusum.Add(random.Normal());
            }
            while (cusum.Upper <= h);
            sum += length;
            squares += (double)length * length;
        }
        double mean = sum / Runs, standardError = Math.Sqrt((squares / Runs - mean * mean) / Runs);
        Assert.InRange(mean, runLength - 2 * standardError, runLength + 2 * standardError);
        Assert.True(standardError < 0.02 * runLength);
    }

    [Theory]
    [InlineData(0.5, 335.367577627232, 4)]
    [InlineData(0.5, 930.887012064196, 5)]
    [InlineData(0.25, 141.687745216854, 5)]
    public void DecisionInterval_RunLength_IsTheInverse(double k, double runLength, double h) =>
        Assert.Equal(h, CusumRunLength.DecisionInterval(k, runLength), 1e-6);

    [Fact]
    public void PageHinkley_NormalObservations_SignalsAboutAsOftenAsAsked()
    {
        const int RunLength = 5000, Streams = 200, Length = 5000;
        int signals = 0;
        var test = PageHinkley.ForRunLength(standardDeviation: 3, shift: 1, RunLength);
        for (ulong stream = 0; stream < Streams; stream++)
        {
            var random = new FixedStream(100 + stream);
            test.Reset();
            for (int i = 0; i < Length; i++)
            {
                if (!test.Add(10 + 3 * random.Normal())) continue;
                signals++;
                test.Reset();
            }
        }
        // 200 expected; the running mean, which is not settled yet, makes signals rarer.
        Assert.InRange(signals, 60, Streams * Length / RunLength + 2 * Math.Sqrt(Streams));
    }

    [Fact]
    public void PageHinkley_RiseOfOneStandardDeviation_IsFoundWithin30()
    {
        var delays = new List<int>();
        var test = PageHinkley.ForRunLength(3, 1, 10_000);
        for (ulong stream = 0; stream < 100; stream++)
        {
            var random = new FixedStream(500 + stream);
            test.Reset();
            for (int i = 0; i < 500; i++)
                if (test.Add(10 + 3 * random.Normal())) test.Reset();
            int delay = 1;
            while (!test.Add(13 + 3 * random.Normal())) delay++;
            delays.Add(delay);
            Assert.InRange(test.SinceMinimum, 1, 500);
        }
        // The one-sided CUSUM of this run length takes about 14.
        Assert.InRange(delays.Average(), 5, 30);
    }
}
