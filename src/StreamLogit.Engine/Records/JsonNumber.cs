using System.Buffers.Binary;
using System.Globalization;
using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Records;

/// <summary>JSON numbers: their grammar (RFC 8259, section 6) and the double nearest to them, in one pass.</summary>
internal static unsafe class JsonNumber
{
    /// <summary>So many digits always fit into 64 bits.</summary>
    private const int SafeDigits = 19;

    private static ReadOnlySpan<ulong> PowersOfTen => [1, 10, 100, 1_000, 10_000, 100_000, 1_000_000, 10_000_000, 100_000_000];

    /// <summary>Reads a number. Returns the place behind it, or null if there is none.</summary>
    /// <param name="start">Its first byte; a byte that fits in no number must follow it.</param>
    /// <param name="fault">Told what is wrong.</param>
    /// <param name="value">The nearest double, infinite if it is too large for one.</param>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static byte* Read(byte* start, JsonFault fault, out double value)
    {
        byte* at = start;
        bool isNegative = *at == '-';
        if (isNegative) at++;
        byte* digits = at;
        ulong mantissa = 0;
        at = ReadDigits(at, ref mantissa);
        int count = (int)(at - digits);
        value = 0;
        if (count == 0) return fault.Stop(at, isNegative ? "a digit" : "a JSON value");
        if (count > 1 && *digits == '0') return fault.Stop(digits + 1, "a number without leading zeros");
        int exponent = 0;
        if (*at == '.')
        {
            byte* fraction = at + 1;
            at = ReadDigits(fraction, ref mantissa);
            int fractionDigits = (int)(at - fraction);
            if (fractionDigits == 0) return fault.Stop(at, "a digit");
            exponent = -fractionDigits;
            count += fractionDigits;
        }
        if ((*at | 0x20) == 'e')
        {
            at = ReadExponent(at + 1, fault, ref exponent);
            if (at == null) return null;
        }
        value = count <= SafeDigits && NearestDouble.IsExact(mantissa, exponent)
            ? NearestDouble.FromExact(mantissa, exponent)
            : SlowValue(digits, (int)(at - digits), count, mantissa, exponent);
        if (isNegative) value = -value;
        return at;
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private static double SlowValue(byte* digits, int length, int count, ulong mantissa, int exponent)
    {
        bool isMantissaWhole = count <= SafeDigits || SignificantDigits(digits, count) <= SafeDigits;
        return isMantissaWhole && NearestDouble.TryFind(mantissa, exponent, out double value)
            ? value
            : double.Parse(new ReadOnlySpan<byte>(digits, length), NumberStyles.Float, CultureInfo.InvariantCulture);
    }

    /// <summary>Whether a text is a JSON number and nothing else.</summary>
    public static bool IsNumber(ReadOnlySpan<byte> text)
    {
        int at = 0;
        if (at < text.Length && text[at] == '-') at++;
        int whole = Digits(text, ref at);
        if (whole == 0 || whole > 1 && text[at - whole] == '0') return false;
        if (at < text.Length && text[at] == '.')
        {
            at++;
            if (Digits(text, ref at) == 0) return false;
        }
        if (at < text.Length && (text[at] | 0x20) == 'e')
        {
            at++;
            if (at < text.Length && text[at] is (byte)'+' or (byte)'-') at++;
            if (Digits(text, ref at) == 0) return false;
        }
        return at == text.Length;
    }

    private static int Digits(ReadOnlySpan<byte> text, ref int at)
    {
        int start = at;
        while (at < text.Length && IsDigit(text[at])) at++;
        return at - start;
    }

    /// <summary>Appends digits to a number, modulo 2^64, eight at a time and so without a branch for each.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static byte* ReadDigits(byte* at, ref ulong number)
    {
        while (true)
        {
            ulong word = Unsafe.ReadUnaligned<ulong>(at);
            if (!BitConverter.IsLittleEndian) word = BinaryPrimitives.ReverseEndianness(word);
            // The top bit of every byte below '0' or above '9'. Carries and borrows come from such bytes and run upwards, so the lowest is right.
            ulong others = (word + 0x4646464646464646 | word - 0x3030303030303030) & 0x8080808080808080;
            int count = BitOperations.TrailingZeroCount(others) >> 3;
            if (count == 0) return at;
            // Zeros shifted in below are leading zeros. Then pairs, fours and all eight digits are put together.
            word = (word << 64 - count * 8 & 0x0F0F0F0F0F0F0F0F) * (10 << 8 | 1) >> 8;
            word = (word & 0x00FF00FF00FF00FF) * (100 << 16 | 1) >> 16;
            word = (word & 0x0000FFFF0000FFFF) * (10_000UL << 32 | 1) >> 32;
            number = number * Unsafe.Add(ref MemoryMarshal.GetReference(PowersOfTen), count) + word;
            at += count;
            if (count < 8) return at;
        }
    }

    /// <summary>How many digits there are from the first one that is not 0.</summary>
    private static int SignificantDigits(byte* digits, int count)
    {
        for (; *digits is (byte)'0' or (byte)'.'; digits++)
        {
            if (*digits == '0') count--;
        }
        return count;
    }

    private static byte* ReadExponent(byte* at, JsonFault fault, ref int exponent)
    {
        bool isNegative = *at == '-';
        if (*at is (byte)'+' or (byte)'-') at++;
        if (!IsDigit(*at)) return fault.Stop(at, "a digit");
        int power = 0;
        while (IsDigit(*at))
        {
            // Far beyond every double, but not so far that adding the digits of the fraction could overflow.
            if (power < 100_000_000) power = power * 10 + (*at - '0');
            at++;
        }
        exponent += isNegative ? -power : power;
        return at;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static bool IsDigit(byte value) => (uint)(value - '0') <= 9;
}
