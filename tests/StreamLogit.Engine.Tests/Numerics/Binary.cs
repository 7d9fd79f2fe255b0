using System.Numerics;

namespace StreamLogit.Engine.Tests.Numerics;

/// <summary>A number mantissa * 2^exponent of any precision, to compare doubles with.</summary>
internal readonly record struct Binary(BigInteger Mantissa, int Exponent)
{
    public static Binary Of(double value)
    {
        long bits = BitConverter.DoubleToInt64Bits(value);
        int exponent = (int)((bits >> 52) & 0x7FF);
        BigInteger mantissa = bits & ((1L << 52) - 1);
        if (exponent == 0) exponent = 1;
        else mantissa += 1L << 52;
        return new Binary(value < 0 ? -mantissa : mantissa, exponent - 1075);
    }

    /// <summary>The number as a whole multiple of 2^-bits, cut.</summary>
    public BigInteger Fixed(int bits)
    {
        int shift = Exponent + bits;
        return shift >= 0 ? Mantissa << shift : Mantissa >> -shift;
    }

    /// <summary>How many units in the last place of the exact number <paramref name="computed"/> is away from it.</summary>
    public double UlpsFrom(double computed)
    {
        // The last place of the double next to the exact number; 2^-1074 below the normal range.
        int last = Math.Max((int)BigInteger.Abs(Mantissa).GetBitLength() + Exponent - 53, -1074);
        Binary other = Of(computed);
        BigInteger difference = BigInteger.Abs(Fixed(-last + 64) - other.Fixed(-last + 64));
        return (double)difference / Math.Pow(2, 64);
    }
}
