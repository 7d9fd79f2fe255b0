using StreamLogit.Engine.Fitting;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Tests.Fitting;

public sealed class VariantLossesTests
{
    private const int Variants = 203;

    [Fact]
    public void Compute_AnyLogOdds_GivesProbabilityAndLosses()
    {
        double[] logOdds = LogOdds(), probabilities = new double[Variants], zeros = new double[Variants], ones = new double[Variants];
        VariantLosses.Compute(logOdds, probabilities, zeros, ones);
        for (int i = 0; i < Variants; i++)
        {
            Assert.Equal(Elementary.Sigmoid(logOdds[i]), probabilities[i]);
            Assert.Equal(Elementary.Softplus(logOdds[i]), zeros[i]);
            Assert.Equal(Elementary.Softplus(-logOdds[i]), ones[i]);
        }
    }

    [Fact]
    public void Run_EveryLaneWidth_GivesTheSameBits()
    {
        double[][] one = Run<Lanes1>();
        foreach (var wider in new[] { Run<Lanes2>(), Run<Lanes4>(), Run<Lanes8>() })
            for (int k = 0; k < 3; k++) Assert.Equal(one[k], wider[k]);
    }

    private static double[][] Run<T>() where T : struct, ILanes<T>
    {
        double[][] results = [new double[Variants], new double[Variants], new double[Variants]];
        int done = VariantLosses.Run<T>(LogOdds(), results[0], results[1], results[2], 0);
        Assert.Equal(Variants / T.Width * T.Width, done);
        VariantLosses.Run<Lanes1>(LogOdds(), results[0], results[1], results[2], done);
        return results;
    }

    private static double[] LogOdds()
    {
        var random = new Random(1);
        return [.. Enumerable.Range(0, Variants).Select(_ => Math.Pow(10, random.NextDouble() * 5 - 2) * (random.Next(2) * 2 - 1))];
    }
}
