namespace StreamLogit.Engine.Records;

/// <summary>Reads seconds or milliseconds since 1970-01-01T00:00:00Z, written as a JSON number, to the microsecond.</summary>
/// <remarks>The decimal digits are counted exactly; what is finer than a microsecond is cut off towards the past.</remarks>
internal static class UnixTime
{
    /// <summary>The most digits before the point that microseconds within <see cref="TimeRange"/> have.</summary>
    private const int MostDigits = 18;

    /// <summary>Reads a time.</summary>
    /// <param name="text">All of it.</param>
    /// <param name="microsecondsExponent">The power of ten by which it becomes microseconds: 6 for seconds, 3 for milliseconds.</param>
    /// <param name="microseconds">Microseconds since 1970-01-01T00:00:00Z.</param>
    public static TimeFault Read(ReadOnlySpan<byte> text, int microsecondsExponent, out long microseconds)
    {
        microseconds = 0;
        if (!JsonNumber.IsNumber(text)) return TimeFault.Form;
        bool isNegative = text[0] == '-';
        if (isNegative) text = text[1..];
        int mantissaLength = text.IndexOfAny((byte)'e', (byte)'E');
        var mantissa = mantissaLength < 0 ? text : text[..mantissaLength];
        int point = mantissa.IndexOf((byte)'.');
        int first = mantissa.IndexOfAnyInRange((byte)'1', (byte)'9');
        if (first < 0) return TimeFault.None;

        // How many digits from the first one that is not 0 stand before the point once it is microseconds.
        long whole = (point < 0 ? mantissa.Length : point) - first + (point >= 0 && first > point ? 1 : 0);
        whole += microsecondsExponent + (mantissaLength < 0 ? 0 : Exponent(text[(mantissaLength + 1)..]));
        if (whole > MostDigits) return TimeFault.Range;

        bool isInexact = false;
        foreach (byte digit in mantissa[first..])
        {
            if (digit == '.') continue;
            if (whole > 0)
            {
                microseconds = microseconds * 10 + (digit - '0');
                whole--;
            }
            else if (digit != '0')
            {
                isInexact = true;
                break;
            }
        }
        for (; whole > 0; whole--) microseconds *= 10;
        if (isNegative) microseconds = isInexact ? -microseconds - 1 : -microseconds;
        return TimeRange.Contains(microseconds) ? TimeFault.None : TimeFault.Range;
    }

    private static long Exponent(ReadOnlySpan<byte> text)
    {
        bool isNegative = text[0] == '-';
        if (text[0] is (byte)'+' or (byte)'-') text = text[1..];
        long power = 0;
        foreach (byte digit in text)
        {
            // Beyond every length a record can have.
            if (power < 1_000_000_000_000) power = power * 10 + (digit - '0');
        }
        return isNegative ? -power : power;
    }
}
