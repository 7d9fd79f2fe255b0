using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// A hash table with open addressing and linear probing. A removal closes its gap, so nothing is left behind. The capacity is any number: the home of
/// a hash is found by a multiplication (Lemire, Fast random integer generation in an interval, 2019), so that the table can grow by half, not to the double.
/// An entry takes 8 bytes and has of the hash only 27 bits: with the 8 of the shard, an id that is not there looks like one of 20 million that are in
/// about one of 1,600 cases, and the comparison of the ids tells.
/// </summary>
internal sealed class IndexShard
{
    /// <summary>A segment's number is kept modulo this.</summary>
    public const int SegmentNumbers = 1 << SegmentBits;

    private const int TagBits = 27;
    private const int SegmentBits = 25;
    private const int OffsetBits = 11; // of an offset in a segment of 16 KiB, a multiple of 8
    private const int OffsetUnit = 8;
    private const int TagShift = 64 - TagBits;
    private const ulong IsUsed = 1UL << (SegmentBits + OffsetBits);

    private ulong[] _entries = new ulong[64];
    private int _count;

    public long Bytes => (long)_entries.Length * sizeof(ulong);

    /// <summary>Asks for the memory in which a hash is looked up.</summary>
    public void Want(ulong hash) => CacheHint.Want(in _entries[Home(TagOf(hash))]);

    public void Add(ulong hash, EventPlace place)
    {
        // At most 4/5 full, so that probes stay short.
        if (_count * 5L >= _entries.Length * 4L) Grow();
        uint segment = (uint)place.Segment % SegmentNumbers;
        Insert((TagOf(hash) << TagShift) | IsUsed | ((ulong)segment << OffsetBits) | ((uint)place.Offset / OffsetUnit));
        _count++;
    }

    /// <summary>A cursor at the first place that may be that of a hash, or -1 where there is none.</summary>
    public int First(ulong hash)
    {
        ulong tag = TagOf(hash);
        return Probe(tag, Home(tag));
    }

    /// <summary>A cursor at the next such place, or -1.</summary>
    public int Next(ulong hash, int cursor) => Probe(TagOf(hash), After(cursor));

    /// <summary>The place at a cursor.</summary>
    /// <param name="cursor">The cursor.</param>
    /// <param name="firstSegment">The number of the first segment that there is.</param>
    public EventPlace PlaceAt(int cursor, int firstSegment)
    {
        ulong entry = _entries[cursor];
        int segment = (int)(entry >> OffsetBits) & (SegmentNumbers - 1);
        int offset = (int)(entry & ((1UL << OffsetBits) - 1)) * OffsetUnit;
        return new EventPlace(firstSegment + ((segment - firstSegment) & (SegmentNumbers - 1)), offset);
    }

    public void RemoveAt(int cursor)
    {
        int gap = cursor;
        for (int i = After(gap); _entries[i] != 0; i = After(i))
        {
            // An entry whose home lies behind the gap would not be found there.
            if (Distance(Home(_entries[i] >> TagShift), i) < Distance(gap, i)) continue;
            _entries[gap] = _entries[i];
            gap = i;
        }
        _entries[gap] = 0;
        _count--;
    }

    // The shard has the 8 bits above these.
    private static ulong TagOf(ulong hash) => (hash >> (64 - 8 - TagBits)) & ((1UL << TagBits) - 1);

    private int Home(ulong tag) => (int)((tag * (ulong)_entries.Length) >> TagBits);

    private int After(int i) => i + 1 == _entries.Length ? 0 : i + 1;

    private int Distance(int from, int to) => to >= from ? to - from : to - from + _entries.Length;

    private int Probe(ulong tag, int i)
    {
        ulong[] entries = _entries;
        for (; entries[i] != 0; i = i + 1 == entries.Length ? 0 : i + 1)
            if (entries[i] >> TagShift == tag) return i;
        return -1;
    }

    private void Insert(ulong entry)
    {
        int i = Home(entry >> TagShift);
        while (_entries[i] != 0) i = After(i);
        _entries[i] = entry;
    }

    private void Grow()
    {
        ulong[] old = _entries;
        _entries = new ulong[old.Length + old.Length / 2];
        foreach (ulong entry in old)
            if (entry != 0) Insert(entry);
    }
}
