using System.Runtime.CompilerServices;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// A hash table with open addressing and linear probing. A removal closes its gap, so nothing is left behind. The capacity is any number: the home of
/// a hash is found by a multiplication (Lemire, Fast random integer generation in an interval, 2019), so that the table can grow by half, not to the double.
/// </summary>
internal sealed class IndexShard
{
    private Entry[] _entries = new Entry[64];
    private int _count;

    public long Bytes => (long)_entries.Length * Unsafe.SizeOf<Entry>();

    /// <summary>Asks for the memory in which a hash is looked up.</summary>
    public void Want(ulong hash) => CacheHint.Want(in _entries[Home(hash)]);

    public void Add(ulong hash, EventPlace place)
    {
        // At most 4/5 full, so that probes stay short.
        if (_count * 5L >= _entries.Length * 4L) Grow();
        Insert(new Entry { Hash = hash, SegmentPlusOne = place.Segment + 1, Offset = place.Offset });
        _count++;
    }

    /// <summary>A cursor at the first place of a hash, or -1 where there is none.</summary>
    public int First(ulong hash) => Probe(hash, Home(hash));

    /// <summary>A cursor at the next place of the same hash, or -1.</summary>
    public int Next(ulong hash, int cursor) => Probe(hash, After(cursor));

    public EventPlace PlaceAt(int cursor) => new(_entries[cursor].SegmentPlusOne - 1, _entries[cursor].Offset);

    public void RemoveAt(int cursor)
    {
        int gap = cursor;
        for (int i = After(gap); _entries[i].IsUsed; i = After(i))
        {
            // An entry whose home lies behind the gap would not be found there.
            if (Distance(Home(_entries[i].Hash), i) < Distance(gap, i)) continue;
            _entries[gap] = _entries[i];
            gap = i;
        }
        _entries[gap] = default;
        _count--;
    }

    private int Home(ulong hash) => (int)(((hash & uint.MaxValue) * (ulong)_entries.Length) >> 32);

    private int After(int i) => i + 1 == _entries.Length ? 0 : i + 1;

    private int Distance(int from, int to) => to >= from ? to - from : to - from + _entries.Length;

    private int Probe(ulong hash, int i)
    {
        for (; _entries[i].IsUsed; i = After(i))
            if (_entries[i].Hash == hash) return i;
        return -1;
    }

    private void Insert(in Entry entry)
    {
        int i = Home(entry.Hash);
        while (_entries[i].IsUsed) i = After(i);
        _entries[i] = entry;
    }

    private void Grow()
    {
        var old = _entries;
        _entries = new Entry[old.Length + old.Length / 2];
        foreach (ref var entry in old.AsSpan())
            if (entry.IsUsed) Insert(entry);
    }

    private struct Entry
    {
        public ulong Hash;
        public int SegmentPlusOne; // 0 where the entry is free
        public int Offset;

        public readonly bool IsUsed => SegmentPlusOne != 0;
    }
}
