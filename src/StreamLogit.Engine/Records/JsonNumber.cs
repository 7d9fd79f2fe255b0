using System.Globalization;
using System.Runtime.CompilerServices;

namespace StreamLogit.Engine.Records;

/// <summary>JSON numbers: their grammar (RFC 8259, section 6) and the double nearest to them, in one pass.</summary>
internal static unsafe class JsonNumber
{
    /// <summary>Up to here whole numbers are exact in a double: 2^53.</summary>
    private const ulong LargestExact = 1UL << 53;

    /// <summary>Up to this many digits a number cannot overflow 64 bits.</summary>
    private const int SafeDigits = 19;

    /// <summary>The powers of ten that are exact in a double.</summary>
    private static readonly double[] PowersOfTen =
    [
        1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
    ];

    /// <summary>Reads a number. Returns the place behind it, or null if there is none.</summary>
    /// <param name="start">Its first byte; a byte that fits in no number must follow it.</param>
    /// <param name="fault">Told what is wrong.</param>
    /// <param name="value">The nearest double, infinite if it is too large for one.</param>
    /// <remarks>
    /// A mantissa of at most 2^53 times or divided by an exact power of ten is rounded once, so it is the nearest double
    /// (W. D. Clinger, How to read floating point numbers accurately, 1990). All others go the long way.
    /// </remarks>
    public static byte* Read(byte* start, JsonFault fault, out double value)
    {
        byte* at = start;
        bool isNegative = *at == '-';
        if (isNegative) at++;
        byte* digits = at;
        ulong mantissa = (uint)(*at - '0');
        value = 0;
        if (mantissa > 9) return fault.Stop(at, isNegative ? "a digit" : "a JSON value");
        at++;
        if (mantissa == 0)
        {
            if (IsDigit(*at)) return fault.Stop(at, "a number without leading zeros");
        }
        else
        {
            while (IsDigit(*at)) mantissa = mantissa * 10 + (uint)(*at++ - '0');
        }
        long count = at - digits;
        int exponent = 0;
        if (*at == '.')
        {
            byte* fraction = ++at;
            while (IsDigit(*at)) mantissa = mantissa * 10 + (uint)(*at++ - '0');
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
        if (count <= SafeDigits && mantissa <= LargestExact && (uint)(exponent + 22) <= 44)
        {
            double exact = mantissa;
            exact = exponent < 0 ? exact / PowersOfTen[-exponent] : exact * PowersOfTen[exponent];
            value = isNegative ? -exact : exact;
        }
        else
        {
            value = double.Parse(new ReadOnlySpan<byte>(start, (int)(at - start)), NumberStyles.Float, CultureInfo.InvariantCulture);
        }
        return at;
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
