using System.Runtime.CompilerServices;
using System.Text;

namespace StreamLogit.Engine.Health.Slices;

/// <summary>The first bytes of a value's text, as plain data.</summary>
internal struct SliceText
{
    /// <summary>The most bytes that are kept.</summary>
    public const int MaximumBytes = 47;

    private byte _length;
    private Bytes _bytes;

    public void Set(ReadOnlySpan<byte> utf8)
    {
        int length = Math.Min(utf8.Length, MaximumBytes);
        // A character is kept whole or not at all.
        while (length < utf8.Length && length > 0 && (utf8[length] & 0xC0) == 0x80) length--;
        utf8[..length].CopyTo(_bytes);
        _length = (byte)length;
    }

    public override readonly string ToString() => Encoding.UTF8.GetString(((ReadOnlySpan<byte>)_bytes)[.._length]);

    [InlineArray(MaximumBytes)]
    private struct Bytes
    {
        private byte _first;
    }
}
