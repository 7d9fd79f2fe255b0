namespace StreamLogit.Engine.Records;

/// <summary>The escapes within JSON strings.</summary>
internal static unsafe class JsonEscapes
{
    /// <summary>Reads an escape \uXXXX.</summary>
    /// <param name="at">Where the backslash should stand.</param>
    /// <param name="unit">The UTF-16 code unit.</param>
    public static bool TryCodeUnit(byte* at, out int unit)
    {
        unit = 0;
        if (at[0] != '\\' || at[1] != 'u') return false;
        for (int i = 2; i < 6; i++)
        {
            if (!char.IsAsciiHexDigit((char)at[i])) return false;
            unit = unit << 4 | (at[i] <= '9' ? at[i] - '0' : (at[i] | 0x20) - 'a' + 10);
        }
        return true;
    }

    /// <summary>Writes the text that a string stands for. Half of a surrogate pair, which makes the record a reject, is written as it is.</summary>
    /// <param name="escaped">What stands between the quotes.</param>
    /// <param name="text">Where the UTF-8 text goes; it is never longer than <paramref name="escaped"/>.</param>
    /// <returns>The length of the text.</returns>
    public static int Unescape(ReadOnlySpan<byte> escaped, Span<byte> text)
    {
        fixed (byte* start = escaped)
        fixed (byte* target = text)
        {
            byte* at = start;
            byte* end = start + escaped.Length;
            byte* to = target;
            while (at < end)
            {
                if (*at != '\\')
                {
                    *to++ = *at++;
                    continue;
                }
                if (at[1] == 'u')
                {
                    TryCodeUnit(at, out int code);
                    at += 6;
                    if ((code & 0xFC00) == 0xD800 && end - at >= 6 && TryCodeUnit(at, out int low) && (low & 0xFC00) == 0xDC00)
                    {
                        code = 0x10000 + ((code - 0xD800) << 10) + (low - 0xDC00);
                        at += 6;
                    }
                    to = Encode(code, to);
                    continue;
                }
                *to++ = at[1] switch
                {
                    (byte)'b' => (byte)'\b',
                    (byte)'f' => (byte)'\f',
                    (byte)'n' => (byte)'\n',
                    (byte)'r' => (byte)'\r',
                    (byte)'t' => (byte)'\t',
                    byte same => same,
                };
                at += 2;
            }
            return (int)(to - target);
        }
    }

    private static byte* Encode(int code, byte* to)
    {
        if (code < 0x80)
        {
            *to++ = (byte)code;
            return to;
        }
        if (code < 0x800)
        {
            *to++ = (byte)(0xC0 | code >> 6);
        }
        else
        {
            if (code < 0x10000)
            {
                *to++ = (byte)(0xE0 | code >> 12);
            }
            else
            {
                *to++ = (byte)(0xF0 | code >> 18);
                *to++ = (byte)(0x80 | code >> 12 & 0x3F);
            }
            *to++ = (byte)(0x80 | code >> 6 & 0x3F);
        }
        *to++ = (byte)(0x80 | code & 0x3F);
        return to;
    }
}
