using System.Numerics;

namespace StreamLogit.Engine.Tests.Numerics;

/// <summary>Elementary functions in fixed-point arithmetic of 300 binary places, from their series; about 80 right decimal digits.</summary>
internal static class HighPrecision
{
    private const int Bits = 300;
    private static readonly BigInteger One = BigInteger.One << Bits;
    private static readonly BigInteger Ln2 = 2 * InverseHyperbolicTangent(One / 3);

    public static Binary Exp(double x)
    {
        BigInteger argument = Binary.Of(x).Fixed(Bits);
        BigInteger n = BigInteger.Divide(argument, Ln2) - 1;
        return new Binary(ExpSeries(argument - n * Ln2), (int)n - Bits);
    }

    public static Binary Log(double x) => new(LogOfFixed(Binary.Of(x)), -Bits);

    public static Binary Log1p(double x)
    {
        Binary exact = Binary.Of(x);
        if (Math.Abs(x) > 1e-18) return new(LogOfFixed(new Binary(One + exact.Fixed(Bits), -Bits)), -Bits);

        // x - x^2/2 + ..., of which the third term is below 2^-118 of the first.
        BigInteger factor = One - exact.Fixed(Bits) / 2;
        return new Binary(exact.Mantissa * factor, exact.Exponent - Bits);
    }

    public static Binary Sigmoid(double x)
    {
        Binary e = Exp(-Math.Abs(x));
        BigInteger divisor = One + e.Fixed(Bits);
        return x >= 0
            ? new Binary((One << Bits) / divisor, -Bits)
            : new Binary((e.Mantissa << Bits) / divisor, e.Exponent);
    }

    /// <summary>Sine of the angle that is <paramref name="turns"/> full turns and some quarter turns.</summary>
    public static double SinOfTurn(double turns, int quarters)
    {
        BigInteger angle = (Binary.Of(turns).Fixed(Bits) + quarters * One / 4) * (8 * EighthOfTurn()) >> Bits;
        BigInteger term = angle, sum = 0;
        for (int k = 1; !term.IsZero; k += 2)
        {
            sum += term;
            term = -(((term * angle >> Bits) * angle >> Bits) / ((k + 1) * (k + 2)));
        }
        return (double)(sum >> (Bits - 100)) / Math.Pow(2, 100);
    }

    // pi/4 = 4 arctan(1/5) - arctan(1/239) (Machin 1706).
    private static BigInteger EighthOfTurn() => 4 * InverseTangentOfOneOver(5) - InverseTangentOfOneOver(239);

    private static BigInteger InverseTangentOfOneOver(int n)
    {
        BigInteger power = One / n, sum = 0;
        for (int k = 1; !power.IsZero; k += 2, power = -power / (n * n)) sum += power / k;
        return sum;
    }

    private static BigInteger ExpSeries(BigInteger x)
    {
        BigInteger term = One, sum = 0;
        for (int k = 1; !term.IsZero; k++)
        {
            sum += term;
            term = (term * x >> Bits) / k;
        }
        return sum;
    }

    private static BigInteger LogOfFixed(Binary x)
    {
        int k = (int)x.Mantissa.GetBitLength() + x.Exponent;
        BigInteger m = new Binary(x.Mantissa, x.Exponent - k).Fixed(Bits);
        return k * Ln2 + 2 * InverseHyperbolicTangent(((m - One) << Bits) / (m + One));
    }

    private static BigInteger InverseHyperbolicTangent(BigInteger s)
    {
        BigInteger square = s * s >> Bits, power = s, sum = 0;
        for (int k = 1; !power.IsZero && power != -1; k += 2, power = power * square >> Bits) sum += power / k;
        return sum;
    }
}
