using System.Globalization;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Tests.Numerics;

/// <summary>Errors against values computed with 300 binary places, over the whole range.</summary>
public sealed class ElementaryTests
{
    private const double LargestError = 2;

    [Fact]
    public void Exp_WholeRange_WithinTwoUlps() =>
        AssertError(Elementary.Exp, HighPrecision.Exp, Spread(-745.13, 709.78, 20_000, 1).Concat(TinyOfBothSigns(2)));

    [Fact]
    public void Log_WholeRange_WithinTwoUlps() =>
        AssertError(Elementary.Log, HighPrecision.Log, AllMagnitudes(20_000, 3).Concat(Spread(0.5, 2, 10_000, 4)));

    [Fact]
    public void Log1p_WholeRange_WithinTwoUlps() =>
        AssertError(Elementary.Log1p, HighPrecision.Log1p,
            AllMagnitudes(10_000, 5).Concat(Spread(-0.999999, 3, 20_000, 6)).Concat(TinyOfBothSigns(7)));

    [Fact]
    public void Log1pOfUnit_UnitInterval_WithinTwoUlps() =>
        AssertError(x => LaneMath.Log1pOfUnit(new Lanes1(x)).Value, HighPrecision.Log1p,
            Spread(0, 1, 20_000, 8).Concat(AllMagnitudes(10_000, 9).Where(x => x <= 1)).Append(1));

    [Fact]
    public void Sigmoid_WholeRange_WithinTwoUlps() =>
        AssertError(Elementary.Sigmoid, HighPrecision.Sigmoid,
            Spread(-745.13, 745, 20_000, 10).Concat(Spread(-5, 5, 20_000, 11)).Concat(TinyOfBothSigns(12)));

    [Theory]
    [InlineData(double.NegativeInfinity, 0)]
    [InlineData(-746, 0)]
    [InlineData(-745.2, 0)]
    [InlineData(-745.1, 5e-324)]
    [InlineData(0, 1)]
    [InlineData(709.79, double.PositiveInfinity)]
    [InlineData(1e300, double.PositiveInfinity)]
    [InlineData(double.PositiveInfinity, double.PositiveInfinity)]
    [InlineData(double.NaN, double.NaN)]
    public void Exp_Border_IsExact(double x, double expected) => Assert.Equal(expected, Elementary.Exp(x));

    [Theory]
    [InlineData(0, double.NegativeInfinity)]
    [InlineData(1, 0)]
    [InlineData(-1, double.NaN)]
    [InlineData(double.NegativeInfinity, double.NaN)]
    [InlineData(double.PositiveInfinity, double.PositiveInfinity)]
    [InlineData(double.NaN, double.NaN)]
    public void Log_Border_IsExact(double x, double expected)
    {
        Assert.Equal(expected, Elementary.Log(x));
        Assert.Equal(expected, Elementary.Log1p(x - 1));
    }

    [Theory]
    [InlineData(double.NegativeInfinity, 0)]
    [InlineData(-800, 0)]
    [InlineData(0, 0.5)]
    [InlineData(800, 1)]
    [InlineData(double.PositiveInfinity, 1)]
    public void Sigmoid_Border_IsExact(double x, double expected) => Assert.Equal(expected, Elementary.Sigmoid(x));

    [Theory]
    [InlineData(1e300, 1e300)]
    [InlineData(0, 0.693147180559945309)]
    [InlineData(-800, 0)]
    public void Softplus_Border_IsRight(double x, double expected) => Assert.Equal(expected, Elementary.Softplus(x), 1e-15);

    [Fact]
    public void SinCosOfTurn_WholeTurn_WithinItsBound()
    {
        foreach (double turns in Spread(0, 1, 5_000, 13))
        {
            Elementary.SinCosOfTurn(turns, out double sin, out double cos);
            Assert.InRange(Math.Abs(sin - HighPrecision.SinOfTurn(turns, 0)), 0, 4e-16);
            Assert.InRange(Math.Abs(cos - HighPrecision.SinOfTurn(turns, 1)), 0, 4e-16);
        }
    }

    [Theory]
    [InlineData(0, 0, 1)]
    [InlineData(0.25, 1, 0)]
    [InlineData(0.5, 0, -1)]
    [InlineData(0.75, -1, 0)]
    public void SinCosOfTurn_QuarterTurns_AreExact(double turns, double expectedSin, double expectedCos)
    {
        Elementary.SinCosOfTurn(turns, out double sin, out double cos);
        Assert.Equal(expectedSin, sin);
        Assert.Equal(expectedCos, cos);
    }

    private static void AssertError(Func<double, double> function, Func<double, Binary> exact, IEnumerable<double> arguments)
    {
        double worst = 0, at = 0;
        foreach (double x in arguments)
        {
            double error = exact(x).UlpsFrom(function(x));
            if (error > worst) (worst, at) = (error, x);
        }
        TestContext.Current.TestOutputHelper?.WriteLine(
            string.Create(CultureInfo.InvariantCulture, $"largest error {worst:F3} ulp at {at:R}"));
        Assert.True(worst <= LargestError, string.Create(CultureInfo.InvariantCulture, $"{worst} ulp at {at:R}"));
    }

    private static IEnumerable<double> Spread(double from, double to, int count, int seed)
    {
        var random = new Random(seed);
        for (int i = 0; i < count; i++) yield return from + (to - from) * random.NextDouble();
    }

    // Positive doubles of every exponent, the subnormal ones included.
    private static IEnumerable<double> AllMagnitudes(int count, int seed)
    {
        var random = new Random(seed);
        for (int i = 0; i < count; i++)
            yield return BitConverter.Int64BitsToDouble(random.NextInt64(1, BitConverter.DoubleToInt64Bits(double.MaxValue)));
    }

    private static IEnumerable<double> TinyOfBothSigns(int seed) =>
        AllMagnitudes(5_000, seed).Where(x => x < 0.5).SelectMany(x => new[] { x, -x });
}
