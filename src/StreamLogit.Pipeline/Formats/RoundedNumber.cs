using System.Globalization;

namespace StreamLogit.Pipeline.Formats;

/// <summary>
/// Numbers that people read, with six decimals at most: <c>0.83</c>, <c>-0.000002</c>. Their last digits would cost most of the time and
/// the length of a score and tell nobody anything.
/// </summary>
public static class RoundedNumber
{
    /// <summary>The most bytes that a number takes.</summary>
    public const int MaximumLength = 32;

    private const int Decimals = 6;
    private const double Scale = 1e6;

    // Up to here the scaled value is a whole number that a double and a long both hold exactly.
    private const double Largest = 1e9;

    /// <summary>Writes a finite number rounded to the nearest millionth. One beyond a billion is written as a double, with all its digits.</summary>
    /// <param name="value">The number.</param>
    /// <param name="room">At least <see cref="MaximumLength"/> bytes.</param>
    /// <returns>How many bytes were written.</returns>
    public static int Write(double value, Span<byte> room)
    {
        int written;
        if (!(Math.Abs(value) <= Largest))
        {
            value.TryFormat(room, out written, provider: CultureInfo.InvariantCulture);
            return written;
        }
        long millionths = (long)Math.Round(value * Scale);
        int sign = 0;
        if (millionths < 0)
        {
            room[0] = (byte)'-';
            sign = 1;
            millionths = -millionths;
        }
        (millionths / (long)Scale).TryFormat(room[sign..], out written, provider: CultureInfo.InvariantCulture);
        written += sign;
        int fraction = (int)(millionths % (long)Scale);
        if (fraction == 0) return written;

        room[written++] = (byte)'.';
        var digits = room.Slice(written, Decimals);
        for (int i = Decimals - 1; i >= 0; i--)
        {
            digits[i] = (byte)('0' + fraction % 10);
            fraction /= 10;
        }
        return written + digits.TrimEnd((byte)'0').Length;
    }
}
