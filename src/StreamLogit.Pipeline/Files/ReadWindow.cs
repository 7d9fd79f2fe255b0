using System.IO.Hashing;

namespace StreamLogit.Pipeline.Files;

/// <summary>
/// The part of a file that is in memory: bytes read and not taken yet, and before them the last bytes taken, which the fingerprint
/// of a position needs.
/// </summary>
internal sealed class ReadWindow
{
    /// <summary>How many bytes before a position its fingerprint covers.</summary>
    public const int FingerprintBytes = 256;

    private const int ChunkBytes = 1 << 18;

    private byte[] _buffer = new byte[FingerprintBytes + ChunkBytes];
    private int _start;
    private int _end;

    /// <summary>Where the first byte not taken stands in the content.</summary>
    public long Offset { get; private set; }

    /// <summary>The bytes not taken.</summary>
    public ReadOnlySpan<byte> Unread => _buffer.AsSpan(_start, _end - _start);

    /// <summary>The last bytes taken.</summary>
    public ReadOnlySpan<byte> Taken => _buffer.AsSpan(Math.Max(0, _start - FingerprintBytes), Math.Min(FingerprintBytes, _start));

    /// <summary>Tells the content before <see cref="Offset"/> from another.</summary>
    public ulong Fingerprint => XxHash3.HashToUInt64(Taken);

    /// <summary>Takes bytes off the front.</summary>
    public void Take(int count)
    {
        _start += count;
        Offset += count;
    }

    /// <summary>Makes room behind the bytes that are there, and hands it out.</summary>
    public Memory<byte> MakeRoom()
    {
        int kept = Taken.Length;
        if (_start > kept)
        {
            _buffer.AsSpan(_start - kept, kept + _end - _start).CopyTo(_buffer);
            _end -= _start - kept;
            _start = kept;
        }
        // The cutters take something from any window that is longer than the longest record, so this ends.
        if (_end == _buffer.Length) Array.Resize(ref _buffer, _buffer.Length * 2);
        return _buffer.AsMemory(_end);
    }

    /// <summary>Says how many bytes were put into the room.</summary>
    public void Add(int count) => _end += count;

    /// <summary>Empties it and takes up at an offset of the content.</summary>
    /// <param name="offset">The offset.</param>
    /// <param name="before">The bytes before it, as many as a fingerprint covers or as there are.</param>
    public void MoveTo(long offset, ReadOnlySpan<byte> before)
    {
        before.CopyTo(_buffer);
        _start = _end = before.Length;
        Offset = offset;
    }
}
