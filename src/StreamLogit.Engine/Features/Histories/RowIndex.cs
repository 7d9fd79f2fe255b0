using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>
/// From the 64-bit hash of a key to the number of its row. Open addressing with linear probing; a removal closes its gap. An entry holds half of the
/// hash; whoever looks up compares the whole one, which stands in the row.
/// </summary>
internal sealed class RowIndex
{
    private ulong[] _entries = new ulong[SmallestCapacity]; // the upper half of the hash, then the row + 1; 0 is free

    public const int SmallestCapacity = 64;

    public int Count { get; private set; }

    /// <summary>Bytes that it takes when it holds so many rows.</summary>
    public static long BytesFor(long rows)
    {
        long capacity = SmallestCapacity;
        while (IsFull(rows - 1, capacity)) capacity *= 2;
        return capacity * sizeof(ulong);
    }

    /// <summary>Asks for the memory in which a hash is looked up.</summary>
    public void Want(ulong key) => CacheHint.Want(in _entries[Home(key)]);

    /// <summary>The first place where a row of this hash may stand.</summary>
    public int Home(ulong key) => (int)(key >> 32) & (_entries.Length - 1);

    /// <summary>The next row at or behind a place whose half of the hash is the same, or -1 where there is none. Moves the place on to it.</summary>
    public int Next(ulong key, ref int place)
    {
        ulong[] entries = _entries;
        uint tag = (uint)(key >> 32);
        for (; ; place = (place + 1) & (entries.Length - 1))
        {
            ulong entry = entries[place];
            if (entry == 0) return -1;
            if ((uint)(entry >> 32) == tag) return (int)(uint)entry - 1;
        }
    }

    public int After(int place) => (place + 1) & (_entries.Length - 1);

    public void Add(ulong key, int row)
    {
        if (IsFull(Count, _entries.Length)) Grow();
        Insert((key >> 32 << 32) | (uint)(row + 1));
        Count++;
    }

    /// <summary>Takes out the row that stands at a place.</summary>
    public void RemoveAt(int place)
    {
        int mask = _entries.Length - 1;
        int gap = place;
        for (int i = (gap + 1) & mask; _entries[i] != 0; i = (i + 1) & mask)
        {
            // An entry whose home lies behind the gap would not be found there.
            int distanceFromHome = (i - Home(_entries[i])) & mask;
            int distanceFromGap = (i - gap) & mask;
            if (distanceFromHome < distanceFromGap) continue;
            _entries[gap] = _entries[i];
            gap = i;
        }
        _entries[gap] = 0;
        Count--;
    }

    // At most 7/10 full, so that probes stay short.
    private static bool IsFull(long count, long capacity) => count * 10 >= capacity * 7;

    private void Insert(ulong entry)
    {
        int mask = _entries.Length - 1;
        int i = Home(entry);
        while (_entries[i] != 0) i = (i + 1) & mask;
        _entries[i] = entry;
    }

    private void Grow()
    {
        var old = _entries;
        _entries = new ulong[old.Length * 2];
        foreach (ulong entry in old)
            if (entry != 0) Insert(entry);
    }
}
