namespace StreamLogit.Engine.Features.Text;

/// <summary>Text made plain, so that what reads alike is alike: ASCII letters small, and one space where words part.</summary>
internal sealed class PlainText
{
    private byte[] _bytes = new byte[1024];
    private int _length;

    public ReadOnlySpan<byte> Bytes => _bytes.AsSpan(0, _length);

    /// <summary>Takes the words: runs of ASCII letters and digits and of everything beyond ASCII.</summary>
    public void TakeWords(ReadOnlySpan<byte> utf8) => Take(utf8, keepsSigns: false);

    /// <summary>Takes everything but runs of spaces and control characters, which become one space.</summary>
    public void TakeCharacters(ReadOnlySpan<byte> utf8) => Take(utf8, keepsSigns: true);

    private void Take(ReadOnlySpan<byte> utf8, bool keepsSigns)
    {
        if (_bytes.Length < utf8.Length) _bytes = new byte[Math.Max(utf8.Length, 2 * _bytes.Length)];
        _length = 0;
        bool isGap = false;
        foreach (byte b in utf8)
        {
            bool isKept = b >= 0x80 || (keepsSigns ? b > ' ' && b != 0x7f : char.IsAsciiLetterOrDigit((char)b));
            if (!isKept)
            {
                isGap = true;
                continue;
            }
            if (isGap && _length > 0) _bytes[_length++] = (byte)' ';
            isGap = false;
            _bytes[_length++] = b is >= (byte)'A' and <= (byte)'Z' ? (byte)(b + 32) : b;
        }
    }
}
