using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Awaiting;

/// <summary>Reads segments that are in the archive, and keeps the last few in memory.</summary>
internal sealed class SegmentReader(IBlockArchive? archive, string part)
{
    private const int Places = 256;
    private readonly byte[][] _bytes = [.. Enumerable.Repeat(Array.Empty<byte>(), Places)];
    private readonly int[] _numbers = [.. Enumerable.Repeat(-1, Places)];

    /// <summary>Bytes of memory in use.</summary>
    public long Bytes => _bytes.Sum(b => (long)b.Length);

    public byte[] Read(int number)
    {
        // A segment has one place it can be in: no bookkeeping, and the cursors, which walk in order, hit always.
        int place = number % Places;
        if (_numbers[place] == number) return _bytes[place];
        if (archive is null) throw new InvalidStateException($"segment {number} is neither in memory nor archived");
        _numbers[place] = -1;
        archive.Read(part, number, ref _bytes[place]);
        _numbers[place] = number;
        return _bytes[place];
    }
}
