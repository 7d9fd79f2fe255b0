using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Tests.Numerics;

/// <summary>Every width gives the bits of the narrowest, also where the machine lacks it and the runtime emulates it.</summary>
public sealed class LaneMathTests
{
    private static readonly double[] Arguments = CreateArguments();

    [Fact]
    public void Functions_EveryWidth_GiveTheSameBits()
    {
        double[] expected = Values<Lanes1>();
        Assert.Equal(Bits(expected), Bits(Values<Lanes2>()));
        Assert.Equal(Bits(expected), Bits(Values<Lanes4>()));
        Assert.Equal(Bits(expected), Bits(Values<Lanes8>()));
    }

    [Fact]
    public void LogOfNormal_NormalArguments_IsLog()
    {
        foreach (double x in Arguments.Select(Math.Abs).Where(double.IsNormal))
            Assert.Equal(Elementary.Log(x), LaneMath.LogOfNormal(new Lanes1(x)).Value);
    }

    private static double[] Values<T>() where T : struct, ILanes<T>
    {
        double[] values = new double[Arguments.Length * 7];
        for (int i = 0; i < Arguments.Length; i += T.Width)
        {
            T x = T.Load(in Arguments[0], (nuint)i);
            T exp = LaneMath.ExpOfMinusAbs(x);
            T[] results =
            [
                LaneMath.Exp(x), LaneMath.Log(x), LaneMath.Log1p(x), LaneMath.Sigmoid(x), exp, LaneMath.Log1pOfUnit(exp), LaneMath.SoftplusOf(x, exp),
            ];
            for (int r = 0; r < results.Length; r++) results[r].Store(ref values[r * Arguments.Length], (nuint)i);
        }
        return values;
    }

    private static long[] Bits(double[] values) => [.. values.Select(v => double.IsNaN(v) ? 0 : BitConverter.DoubleToInt64Bits(v))];

    private static double[] CreateArguments()
    {
        var random = new Random(1);
        double[] special = [0, -0.0, 1, -1, 710, 709.78, -745.1, -746, 1e300, -1e300, 5e-324, 2.2e-308, double.MaxValue, double.PositiveInfinity, double.NegativeInfinity, double.NaN];
        return
        [
            .. special,
            .. Enumerable.Range(0, 4000).Select(_ => (random.NextDouble() - 0.5) * 1500),
            .. Enumerable.Range(0, 4000).Select(_ => BitConverter.Int64BitsToDouble(random.NextInt64(long.MinValue, long.MaxValue))).Select(v => double.IsNaN(v) ? 1 : v),
        ];
    }
}
