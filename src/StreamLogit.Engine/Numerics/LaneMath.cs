using System.Runtime.CompilerServices;

namespace StreamLogit.Engine.Numerics;

/// <summary>
/// Elementary functions of every lane, made of correctly rounded operations only, so that they have the same bits on every
/// machine and width. At most 2 units in the last place from the exact value, subnormal arguments and results included.
/// </summary>
/// <remarks>
/// The coefficients are those of the Taylor series of exp and of the series ln((1 + s)/(1 - s)) = 2 (s + s^3/3 + s^5/5 ...);
/// the arguments are reduced until what the cut series leaves out is below 2^-57 of the result.
/// </remarks>
internal static class LaneMath
{
    private const double Log2OfE = 1.4426950408889634;

    // ln 2 in two parts. The first has 41 bits, so that its product with a binary exponent (11 bits) is exact.
    private const double Ln2Leading = 0.693147180559663;
    private const double Ln2Trailing = 2.8235290563031577e-13;

    // Adding 1.5 * 2^52 rounds to an integer, which then stands in the low bits.
    private const double RoundToInteger = 6755399441055744;
    private const double TwoTo52 = 4503599627370496;
    private const double TwoTo54 = 18014398509481984;
    private const double SmallestNormal = 2.2250738585072014e-308;
    private const double SqrtHalf = 0.70710678118654757;
    private const double Sqrt2Minus1 = 0.41421356237309503;

    private const ulong MantissaBits = (1UL << 52) - 1;
    private static readonly double OneLessSqrtHalfBits =
        BitConverter.UInt64BitsToDouble(BitConverter.DoubleToUInt64Bits(1) - BitConverter.DoubleToUInt64Bits(SqrtHalf));

    /// <summary>e^x: 0 below -745.2, infinity above 709.8, NaN for NaN.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T Exp<T>(T x) where T : struct, ILanes<T> => ExpOfBounded(T.Select(T.Greater(x, T.Of(710)), T.Of(710), x));

    /// <summary>e^-|x|, which is at most 1.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T ExpOfMinusAbs<T>(T x) where T : struct, ILanes<T> => ExpOfBounded(T.Of(0) - T.Abs(x));

    // For x up to 710. Above it e^x is infinity and below -746 it is 0 anyway, and the exponents would overflow.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T ExpOfBounded<T>(T x) where T : struct, ILanes<T>
    {
        T bounded = T.Select(T.Greater(T.Of(-746), x), T.Of(-746), x);

        // x = n ln 2 + r with |r| <= 0.3466; the terms from r^14/14! on are below 2^-57.
        T n = bounded * T.Of(Log2OfE) + T.Of(RoundToInteger) - T.Of(RoundToInteger);
        T leading = bounded - n * T.Of(Ln2Leading);
        T trailing = n * T.Of(Ln2Trailing);
        T r = leading - trailing;
        T lost = leading - r - trailing;
        T r2 = r * r;
        T r4 = r2 * r2;
        T r8 = r4 * r4;
        T a = (T.Of(1.0 / 2) + T.Of(1.0 / 6) * r) + (T.Of(1.0 / 24) + T.Of(1.0 / 120) * r) * r2;
        T b = (T.Of(1.0 / 720) + T.Of(1.0 / 5040) * r) + (T.Of(1.0 / 40320) + T.Of(1.0 / 362880) * r) * r2;
        T c = (T.Of(1.0 / 3628800) + T.Of(1.0 / 39916800) * r) + (T.Of(1.0 / 479001600) + T.Of(1.0 / 6227020800) * r) * r2;
        T y = T.Of(1) + (r + (lost + r2 * (a + b * r4 + c * r8)));

        // Two factors, because 2^n alone leaves the range of normal numbers where the result is subnormal or near overflow;
        // the first product is exact, so that a subnormal result is rounded once.
        T half = n * T.Of(0.5) + T.Of(RoundToInteger) - T.Of(RoundToInteger);
        return y * PowerOfTwo(half) * PowerOfTwo(n - half);
    }

    /// <summary>ln x: -infinity for 0, NaN below 0 and for NaN.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T Log<T>(T x) where T : struct, ILanes<T>
    {
        T subnormal = T.Greater(T.Of(SmallestNormal), x);
        Split(T.Select(subnormal, x * T.Of(TwoTo54), x), out T k, out T m);
        T result = LogOfProduct(k - T.Select(subnormal, T.Of(54), T.Of(0)), m - T.Of(1), T.Of(0));
        result = T.Select(T.Greater(x, T.Of(double.MaxValue)), x, result);
        return T.Select(T.Greater(x, T.Of(0)), result, LogOutsideOfDomain(x));
    }

    /// <summary>ln x for positive x that are normal and finite, with fewer operations.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T LogOfNormal<T>(T x) where T : struct, ILanes<T>
    {
        Split(x, out T k, out T m);
        return LogOfProduct(k, m - T.Of(1), T.Of(0));
    }

    /// <summary>ln(1 + x): -infinity for -1, NaN below -1 and for NaN.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T Log1p<T>(T x) where T : struct, ILanes<T>
    {
        T sum = T.Of(1) + x;
        Split(sum, out T k, out T m);

        // What 1 + x lost in rounding, to first order.
        T lost = T.Select(T.Greater(x, T.Of(1)), T.Of(1) - (sum - x), x - (sum - T.Of(1))) / sum;
        T isNearOne = T.GreaterOrEqual(T.Of(0.25), k * k);
        T result = LogOfProduct(k, T.Select(isNearOne, x, m - T.Of(1)), T.Select(isNearOne, T.Of(0), lost));
        result = T.Select(T.Greater(x, T.Of(double.MaxValue)), x, result);
        return T.Select(T.Greater(sum, T.Of(0)), result, LogOutsideOfDomain(sum));
    }

    /// <summary>ln(1 + x) for 0 &lt;= x &lt;= 1, with fewer operations.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T Log1pOfUnit<T>(T x) where T : struct, ILanes<T>
    {
        T isFar = T.Greater(x, T.Of(Sqrt2Minus1));
        return LogOfProduct(isFar & T.Of(1), T.Select(isFar, (x - T.Of(1)) * T.Of(0.5), x), T.Of(0));
    }

    /// <summary>1 / (1 + e^-x).</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T Sigmoid<T>(T x) where T : struct, ILanes<T> => SigmoidOf(x, ExpOfMinusAbs(x));

    /// <summary>1 / (1 + e^-x), where e^-|x| is at hand.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T SigmoidOf<T>(T x, T expOfMinusAbs) where T : struct, ILanes<T>
    {
        // For x far below 0 what 1 + e^x lost in rounding is a unit in the last place of the result.
        T divisor = T.Of(1) + expOfMinusAbs;
        T lost = expOfMinusAbs - (divisor - T.Of(1));
        T quotient = T.Select(T.GreaterOrEqual(x, T.Of(0)), T.Of(1), expOfMinusAbs) / divisor;
        return quotient - quotient * lost;
    }

    /// <summary>ln(1 + e^x), where e^-|x| is at hand.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T SoftplusOf<T>(T x, T expOfMinusAbs) where T : struct, ILanes<T> =>
        T.Select(T.Greater(x, T.Of(0)), x, T.Of(0)) + Log1pOfUnit(expOfMinusAbs);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T PowerOfTwo<T>(T integer) where T : struct, ILanes<T> =>
        T.AddBits(T.ShiftBitsLeft(integer + T.Of(RoundToInteger), 52), T.Of(1));

    // x = 2^k m with m from sqrt(1/2) to sqrt(2), for normal positive x.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Split<T>(T x, out T k, out T m) where T : struct, ILanes<T>
    {
        T moved = T.AddBits(x, T.Of(OneLessSqrtHalfBits));
        k = (T.ShiftBitsRight(moved, 52) | T.Of(TwoTo52)) - T.Of(TwoTo52 + 1023);
        m = T.AddBits(moved & T.Of(BitConverter.UInt64BitsToDouble(MantissaBits)), T.Of(SqrtHalf));
    }

    // k ln 2 + ln(1 + f) + correction. With s = f / (2 + f), |s| <= 0.1716, ln(1 + f) = 2 s + s R(s^2), and 2 s = f - s f is written
    // as f - (f^2/2 - s f^2/2), whose leading part f is exact. The terms left out of R are below 2^-60 of the result.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T LogOfProduct<T>(T k, T f, T correction) where T : struct, ILanes<T>
    {
        T s = f / (T.Of(2) + f);
        T z = s * s;
        T z2 = z * z;
        T z4 = z2 * z2;
        T low = (T.Of(2.0 / 3) + T.Of(2.0 / 5) * z) + (T.Of(2.0 / 7) + T.Of(2.0 / 9) * z) * z2;
        T high = (T.Of(2.0 / 11) + T.Of(2.0 / 13) * z) + (T.Of(2.0 / 15) + T.Of(2.0 / 17) * z) * z2;
        T top = T.Of(2.0 / 19) + T.Of(2.0 / 21) * z;
        T series = z * (low + (high + top * z4) * z4);
        T halfSquare = T.Of(0.5) * f * f;
        T trailing = s * (halfSquare + series) + (k * T.Of(Ln2Trailing) + correction);
        return k * T.Of(Ln2Leading) - (halfSquare - trailing - f);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T LogOutsideOfDomain<T>(T x) where T : struct, ILanes<T> =>
        T.Select(T.GreaterOrEqual(x, T.Of(0)), T.Of(double.NegativeInfinity), T.Of(double.NaN));
}
