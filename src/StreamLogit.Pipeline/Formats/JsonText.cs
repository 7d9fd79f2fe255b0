using System.Buffers;
using System.Text;

namespace StreamLogit.Pipeline.Formats;

/// <summary>Text within JSON (RFC 8259), as UTF-8: what must be escaped is, and nothing else.</summary>
public static class JsonText
{
    private const int PieceLength = 1 << 14;

    private static readonly SearchValues<byte> Escaped = SearchValues.Create(
        [.. Enumerable.Range(0, 0x20).Select(i => (byte)i), (byte)'"', (byte)'\\']);

    /// <summary>The most bytes that a text of that many bytes can take: each as <c>\u001f</c>.</summary>
    public static int MaximumLength(int bytes) => bytes * 6;

    /// <summary>Escapes a text that is written often.</summary>
    public static byte[] Escape(string text)
    {
        byte[] utf8 = Encoding.UTF8.GetBytes(text);
        byte[] escaped = new byte[MaximumLength(utf8.Length)];
        return escaped[..Write(utf8, escaped)];
    }

    /// <summary>Writes UTF-8 text escaped, without quotes around it. Bytes from 0x80 up go through as they are.</summary>
    /// <returns>How many bytes were written.</returns>
    public static int Write(ReadOnlySpan<byte> text, Span<byte> room)
    {
        int written = 0;
        while (true)
        {
            int plain = text.IndexOfAny(Escaped);
            if (plain < 0) plain = text.Length;
            text[..plain].CopyTo(room[written..]);
            written += plain;
            if (plain == text.Length) return written;
            written += WriteEscape(text[plain], room[written..]);
            text = text[(plain + 1)..];
        }
    }

    /// <summary>Adds UTF-8 text escaped, without quotes around it, to a buffer, which grows no more than it must.</summary>
    public static void Write(ReadOnlySpan<byte> text, ArrayBufferWriter<byte> buffer)
    {
        do
        {
            var piece = text[..Math.Min(text.Length, PieceLength)];
            buffer.Advance(Write(piece, buffer.GetSpan(MaximumLength(piece.Length) + 1)));
            text = text[piece.Length..];
        }
        while (text.Length > 0);
    }

    /// <summary>
    /// Adds bytes that need not be UTF-8: for each longest piece that cannot begin a character (Unicode 16, section 3.9.6) stands the
    /// escape <c>\ufffd</c>.
    /// </summary>
    public static void WriteBytes(ReadOnlySpan<byte> bytes, ArrayBufferWriter<byte> buffer)
    {
        while (true)
        {
            int valid = ValidPrefix(bytes, out int invalid);
            Write(bytes[..valid], buffer);
            if (valid == bytes.Length) return;
            buffer.Write("\\ufffd"u8);
            bytes = bytes[(valid + invalid)..];
        }
    }

    /// <summary>Whether a text is a number as RFC 8259 writes it.</summary>
    public static bool IsNumber(ReadOnlySpan<byte> text)
    {
        int i = 0;
        if (i < text.Length && text[i] == '-') i++;
        int whole = Digits(text, i);
        if (whole == 0 || (whole > 1 && text[i] == '0')) return false;
        i += whole;
        if (i < text.Length && text[i] == '.')
        {
            int fraction = Digits(text, i + 1);
            if (fraction == 0) return false;
            i += 1 + fraction;
        }
        if (i < text.Length && text[i] is (byte)'e' or (byte)'E')
        {
            i++;
            if (i < text.Length && text[i] is (byte)'+' or (byte)'-') i++;
            int exponent = Digits(text, i);
            if (exponent == 0) return false;
            i += exponent;
        }
        return i == text.Length;
    }

    private static int Digits(ReadOnlySpan<byte> text, int start)
    {
        int i = start;
        while (i < text.Length && (uint)(text[i] - '0') <= 9) i++;
        return i - start;
    }

    private static int ValidPrefix(ReadOnlySpan<byte> bytes, out int invalid)
    {
        int valid = 0;
        invalid = 0;
        while (valid < bytes.Length)
        {
            int ascii = bytes[valid..].IndexOfAnyExceptInRange((byte)0, (byte)0x7f);
            if (ascii < 0) return bytes.Length;
            valid += ascii;
            if (Rune.DecodeFromUtf8(bytes[valid..], out _, out int length) != OperationStatus.Done)
            {
                invalid = length;
                return valid;
            }
            valid += length;
        }
        return valid;
    }

    private static int WriteEscape(byte value, Span<byte> room)
    {
        room[0] = (byte)'\\';
        byte letter = value switch
        {
            (byte)'"' => (byte)'"',
            (byte)'\\' => (byte)'\\',
            (byte)'\b' => (byte)'b',
            (byte)'\f' => (byte)'f',
            (byte)'\n' => (byte)'n',
            (byte)'\r' => (byte)'r',
            (byte)'\t' => (byte)'t',
            _ => 0,
        };
        if (letter != 0)
        {
            room[1] = letter;
            return 2;
        }
        "u00"u8.CopyTo(room[1..]);
        room[4] = (byte)('0' + (value >> 4));
        room[5] = (byte)"0123456789abcdef"[value & 15];
        return 6;
    }
}
