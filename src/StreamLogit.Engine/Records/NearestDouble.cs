using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Records;

/// <summary>The double nearest to mantissa x 10^exponent, ties to even, for nearly all numbers that records have.</summary>
/// <remarks>
/// Two published methods. A mantissa of at most 2^53, times or divided by a power of ten that a double holds exactly, is rounded once
/// (W. D. Clinger, How to read floating point numbers accurately, 1990). Else the mantissa is multiplied with the first 128 bits of the power
/// of five, which nearly always settles the rounding (D. Lemire, Number parsing at a gigabyte per second, Software: Practice and Experience
/// 51(8), 2021). Both use integers or single operations of IEEE 754, so every machine gives the same bits.
/// </remarks>
internal static class NearestDouble
{
    private const ulong LargestExact = 1UL << 53;
    private const int LargestExactPower = 22;

    /// <summary>The powers of ten in the table. Normal doubles of any size need no others.</summary>
    private const int FirstPower = -300;
    private const int LastPower = 289;

    private const int MantissaBits = 52;
    private const int ExponentBias = 1023;

    private static ReadOnlySpan<double> ExactPowersOfTen =>
    [
        1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
    ];

    /// <summary>The first 128 bits of the power of five of every exponent, upper half first.</summary>
    private static readonly ulong[] PowersOfFive = ComputePowersOfFive();

    /// <summary>Whether mantissa and power of ten are both exact in a double.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static bool IsExact(ulong mantissa, int exponent) => mantissa <= LargestExact && (uint)(exponent + LargestExactPower) <= 2 * LargestExactPower;

    /// <summary>The double of an exact mantissa and power of ten.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static double FromExact(ulong mantissa, int exponent)
    {
        double value = (long)mantissa;
        ref double powers = ref MemoryMarshal.GetReference(ExactPowersOfTen);
        return exponent < 0 ? value / Unsafe.Add(ref powers, -exponent) : value * Unsafe.Add(ref powers, exponent);
    }

    /// <summary>Finds the double by the product, unless the exponent is extreme or the rounding remains open.</summary>
    public static bool TryFind(ulong mantissa, int exponent, out double value)
    {
        value = 0;
        if (mantissa == 0) return true;
        if (exponent is < FirstPower or > LastPower) return false;
        int shift = BitOperations.LeadingZeroCount(mantissa);
        mantissa <<= shift;
        int index = (exponent - FirstPower) * 2;
        ulong upper = Math.BigMul(mantissa, PowersOfFive[index], out ulong lower);
        // The bits below the rounding bit decide, unless they are all ones: then what the lower half adds may carry into them.
        if ((upper & 0x1FF) == 0x1FF)
        {
            ulong carried = Math.BigMul(mantissa, PowersOfFive[index + 1], out _);
            lower += carried;
            if (lower < carried) upper++;
            if (lower == ulong.MaxValue) return false;
        }
        int upperBit = (int)(upper >> 63);
        int drop = upperBit + 64 - MantissaBits - 3;
        ulong bits = upper >> drop;
        // Just between two doubles, which only small powers of five can reach: to the even one.
        if (lower <= 1 && exponent is >= -4 and <= 23 && (bits & 3) == 1 && bits << drop == upper) bits &= ~1UL;
        bits = bits + (bits & 1) >> 1;
        // floor(exponent x log2(10)), exact within the table.
        int power = ((152_170 + 65_536) * exponent >> 16) + 63 + upperBit - shift + ExponentBias;
        if (bits >> MantissaBits + 1 != 0)
        {
            bits >>= 1;
            power++;
        }
        if (power is <= 0 or >= 2 * ExponentBias + 1) return false;
        value = BitConverter.UInt64BitsToDouble(bits & (1UL << MantissaBits) - 1 | (ulong)power << MantissaBits);
        return true;
    }

    private static ulong[] ComputePowersOfFive()
    {
        ulong[] table = new ulong[(LastPower - FirstPower + 1) * 2];
        for (int exponent = FirstPower; exponent <= LastPower; exponent++)
        {
            var power = BigInteger.Pow(5, Math.Abs(exponent));
            int bits = (int)power.GetBitLength();
            BigInteger top;
            if (exponent >= 0)
            {
                top = bits > 128 ? power >> bits - 128 : power << 128 - bits;
            }
            else
            {
                // Cut off too, except where 128 bits hold the power so closely that the method wants it rounded up.
                top = (BigInteger.One << bits + 127) / power + (exponent >= -27 ? 1 : 0);
            }
            int index = (exponent - FirstPower) * 2;
            table[index] = (ulong)(top >> 64);
            table[index + 1] = (ulong)(top & ulong.MaxValue);
        }
        return table;
    }
}
