using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Tests.Learning;

public sealed class MarginMoveTests
{
    private static readonly double[] Margins =
        [-1e54, -1e6, -800, -746, -700, -100, -40.5, -40, -39.5, -10, -1, -1e-9, 0, 1e-9, 0.5, 1, 5, 30, 40, 100, 709, 746, 1e6, 1e54];

    private static readonly double[] Lengths =
        [0, 1e-300, 1e-20, 1e-9, 0.01, 0.5, 1, 2, 10, 39.9, 40, 40.1, 100, 1e3, 1e6, 1e20, 1e45, 1e72];

    public static TheoryData<double, double> Cases()
    {
        var cases = new TheoryData<double, double>();
        foreach (double m in Margins)
            foreach (double a in Lengths) cases.Add(m, a);
        return cases;
    }

    /// <summary>The root is bracketed by what the equation gives a little below and above, compared in logarithms so that nothing overflows.</summary>
    [Theory]
    [MemberData(nameof(Cases))]
    public void ByGradientFlow_AnyMarginAndLength_SolvesItsEquation(double m, double a) =>
        AssertRoot(m, a, MarginMove.ByGradientFlow(new Lanes1(m), new Lanes1(a)).Value,
            d => LogOfSum(Math.Log(d), m + (d < 30 ? Math.Log(double.ExpM1(d)) : d)));

    [Theory]
    [MemberData(nameof(Cases))]
    public void ByProximalStep_AnyMarginAndVariance_SolvesItsEquation(double m, double a) =>
        AssertRoot(m, a, MarginMove.ByProximalStep(new Lanes1(m), new Lanes1(a)).Value, d => Math.Log(d) + LogOfSum(0, m + d));

    private static void AssertRoot(double m, double a, double d, Func<double, double> logOfLeftSide)
    {
        // What is below the last place of the margin cannot be told from no move at all.
        double slack = 1e-9 * d + 1e-15 * (1 + Math.Min(Math.Abs(m), 100)) + 1e-15 * Math.Abs(m) * (m < -100 ? 1 : 0);
        Assert.InRange(d, 0, a);
        if (d - slack > 0) Assert.True(logOfLeftSide(d - slack) <= Math.Log(a), $"{d} is too far");
        Assert.True(logOfLeftSide(d + slack) >= Math.Log(a), $"{d} is too near");
    }

    private static double LogOfSum(double a, double b) => Math.Max(a, b) + double.LogP1(Math.Exp(-Math.Abs(a - b)));
}
