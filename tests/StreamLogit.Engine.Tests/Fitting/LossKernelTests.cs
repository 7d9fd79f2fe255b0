using StreamLogit.Engine.Fitting;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Tests.Fitting;

public sealed class LossKernelTests
{
    private const int Rows = 4096;

    [Fact]
    public void Run_EveryLaneWidth_GivesTheSameBits()
    {
        var one = Run<Lanes1>();
        foreach (var wider in new[] { Run<Lanes2>(), Run<Lanes4>(), Run<Lanes8>() })
        {
            Assert.Equal(one.Losses, wider.Losses);
            Assert.Equal(one.Slopes, wider.Slopes);
            Assert.Equal(one.Curvatures, wider.Curvatures);
        }
    }

    [Fact]
    public void Run_AnyLogOdds_GivesTheLossAndItsDerivatives()
    {
        var (logOdds, signs, weights) = Input();
        var (losses, slopes, curvatures) = Run<Lanes4>();
        for (int i = 0; i < Rows; i++)
        {
            double against = signs[i] * logOdds[i];
            double miss = 1 / (1 + Math.Exp(-against));
            Assert.Equal(weights[i] * (Math.Max(0, against) + Math.Log(1 + Math.Exp(-Math.Abs(against)))), losses[i], 1e-13 * (1 + Math.Abs(against)));
            Assert.Equal(weights[i] * signs[i] * miss, slopes[i], 1e-15 * 4);
            Assert.Equal(weights[i] * miss * (1 - miss), curvatures[i], 1e-15 * 4);
        }
    }

    private static (double[] Losses, double[] Slopes, double[] Curvatures) Run<T>() where T : struct, ILanes<T>
    {
        var (logOdds, signs, weights) = Input();
        double[] losses = new double[Rows], slopes = new double[Rows], curvatures = new double[Rows];
        LossKernel.Run<T>(logOdds, signs, weights, losses, slopes, curvatures);
        return (losses, slopes, curvatures);
    }

    private static (double[] LogOdds, double[] Signs, double[] Weights) Input()
    {
        var random = new Random(1);
        double[] logOdds = new double[Rows], signs = new double[Rows], weights = new double[Rows];
        for (int i = 0; i < Rows; i++)
        {
            logOdds[i] = Math.Pow(10, random.NextDouble() * 5 - 2) * (random.Next(2) * 2 - 1);
            signs[i] = random.Next(2) * 2 - 1;
            weights[i] = random.Next(3);
        }
        return (logOdds, signs, weights);
    }
}
