namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// From the 64-bit hash of an id to where its event lies. Open addressing with linear probing; a removal closes its gap, so nothing is left behind.
/// Two ids may share a hash: whoever looks up walks all places of a hash and compares the ids.
/// </summary>
internal sealed class EventIndex
{
    private Entry[] _entries = new Entry[1024]; // a power of two

    public int Count { get; private set; }

    public void Add(ulong hash, EventPlace place)
    {
        // At most 7/10 full, so that probes stay short.
        if (Count * 10L >= _entries.Length * 7L) Grow();
        Insert(new Entry { Hash = hash, Place = place, IsUsed = true });
        Count++;
    }

    /// <summary>A cursor at the first place of a hash, or -1 where there is none.</summary>
    public int First(ulong hash) => Probe(hash, Home(hash));

    /// <summary>A cursor at the next place of the same hash, or -1.</summary>
    public int Next(ulong hash, int cursor) => Probe(hash, (cursor + 1) & (_entries.Length - 1));

    public EventPlace PlaceAt(int cursor) => _entries[cursor].Place;

    public void RemoveAt(int cursor)
    {
        int mask = _entries.Length - 1;
        int gap = cursor;
        for (int i = (gap + 1) & mask; _entries[i].IsUsed; i = (i + 1) & mask)
        {
            // An entry whose home lies behind the gap would not be found there.
            int distanceFromHome = (i - Home(_entries[i].Hash)) & mask;
            int distanceFromGap = (i - gap) & mask;
            if (distanceFromHome < distanceFromGap) continue;
            _entries[gap] = _entries[i];
            gap = i;
        }
        _entries[gap] = default;
        Count--;
    }

    private int Home(ulong hash) => (int)(hash >> 32) & (_entries.Length - 1);

    private int Probe(ulong hash, int i)
    {
        int mask = _entries.Length - 1;
        for (; _entries[i].IsUsed; i = (i + 1) & mask)
            if (_entries[i].Hash == hash) return i;
        return -1;
    }

    private void Insert(in Entry entry)
    {
        int mask = _entries.Length - 1;
        int i = Home(entry.Hash);
        while (_entries[i].IsUsed) i = (i + 1) & mask;
        _entries[i] = entry;
    }

    private void Grow()
    {
        var old = _entries;
        _entries = new Entry[old.Length * 2];
        foreach (ref var entry in old.AsSpan())
            if (entry.IsUsed) Insert(entry);
    }

    private struct Entry
    {
        public ulong Hash;
        public EventPlace Place;
        public bool IsUsed;
    }
}
