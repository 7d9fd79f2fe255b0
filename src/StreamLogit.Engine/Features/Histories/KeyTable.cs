using System.Runtime.InteropServices;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>
/// A row of doubles for every key. When memory is full, rows of the keys longest unseen are put out and come back when their key is asked for
/// again, so that how much memory there is changes no result.
/// </summary>
/// <remarks>
/// A key is the 64-bit hash of its values, and two keys with one hash would share a row. Among n keys the chance that any two do is n^2 / 2^65:
/// 3 in a million for 10 million keys.
/// </remarks>
internal sealed class KeyTable(int words, string part, int table, HistoryMemory memory, IBlockArchive? archive)
{
    /// <summary>The part of the archive with the rows put out, by the hash of their key: very many small blocks.</summary>
    public const string EvictedPart = "histories/evicted";

    // Of every so many rows in turn, this share is put out, those unseen for the longest. All are looked at equally often.
    private const int EvictionWindow = 256;
    private const int EvictedOfWindow = 32;

    private readonly string _countersPart = part + "/counters";
    private readonly RowIndex _index = new();
    private readonly RowPool _rows = new(words, part);
    private readonly List<long> _blocksToRemove = [];
    private readonly long[] _clocks = new long[EvictionWindow];
    private byte[] _bytes = [];
    private int _hand;

    /// <summary>The time before which a row means no more than none and may be dropped.</summary>
    public long ForgettableMicroseconds { get; set; } = long.MinValue;

    public int Count => _index.Count;

    public long Lookups { get; private set; }

    /// <summary>Lookups whose row had to come back.</summary>
    public long Misses { get; private set; }

    /// <summary>Rows put out.</summary>
    public long Evictions { get; private set; }

    public Span<double> this[int row] => _rows[row];

    public void MarkChanged(int row) => _rows.MarkChanged(row);

    /// <summary>The row of a key. A new key's row is all zero, but for its hash.</summary>
    public int FindOrAdd(ulong key, out bool isNew)
    {
        Lookups++;
        isNew = false;
        int row = FindInMemory(key, out _);
        if (row >= 0) return row;
        if (!_rows.HasRoom) MakeRoom();
        row = _rows.Take();
        _index.Add(key, row);
        _rows.MarkChanged(row);
        isNew = !TryBringBack(key, _rows[row]);
        return row;
    }

    /// <summary>Asks for the memory in which a key is looked up.</summary>
    public void WantIndex(ulong key) => _index.Want(key);

    /// <summary>Asks for the memory of the row at which a lookup of the key would look first.</summary>
    public void WantRow(ulong key)
    {
        int place = _index.Home(key);
        int row = _index.Next(key, ref place);
        if (row >= 0) CacheHint.Want(_rows[row]);
    }

    public void Save(StateBlocks changes)
    {
        foreach (long block in _blocksToRemove) _rows.Remove(block, changes);
        _blocksToRemove.Clear();
        _rows.Save(changes);
        ReadOnlySpan<long> counters = [Lookups, Misses, Evictions, _hand];
        changes.Put(_countersPart, 0, MemoryMarshal.AsBytes(counters));
    }

    public void Load(StateBlocks state)
    {
        byte[] counters = state.Find(_countersPart, 0) ?? throw new InvalidStateException($"the state has no {_countersPart}");
        var numbers = MemoryMarshal.Cast<byte, long>(counters);
        (Lookups, Misses, Evictions, _hand) = (numbers[0], numbers[1], numbers[2], (int)numbers[3]);
        foreach (var (number, bytes) in _rows.Saved(state))
        {
            if (TryMakeRoomFor(number)) LoadBlock(number, bytes);
            else PutOut(number, bytes);
        }
    }

    private int FindInMemory(ulong key, out int place)
    {
        place = _index.Home(key);
        while (true)
        {
            int row = _index.Next(key, ref place);
            if (row < 0 || RowPool.KeyOf(_rows[row]) == key) return row;
            place = _index.After(place);
        }
    }

    private bool TryBringBack(ulong key, Span<double> row)
    {
        RowPool.KeyOf(row) = key;
        if (archive is null || Evictions == 0 || !archive.TryRead(EvictedPart, (long)key, ref _bytes, out int length)) return false;
        var target = MemoryMarshal.AsBytes(row);
        if (length > target.Length) throw new InvalidStateException($"a row of {part} that comes back is too long");
        _bytes.AsSpan(0, length).CopyTo(target);
        if (RowPool.KeyOf(row) != key) throw new InvalidStateException($"a row of {part} that comes back is that of another key");
        Misses++;
        return true;
    }

    private void MakeRoom()
    {
        if (archive is null || TryGrow())
        {
            _rows.AddChunk();
            return;
        }
        while (!_rows.HasRoom) Evict();
    }

    private bool TryGrow() => memory.TryTake(table, _rows.BytesPerChunk
        + RowIndex.BytesFor(_rows.Capacity + _rows.RowsPerChunk) - (_rows.Capacity == 0 ? 0 : RowIndex.BytesFor(_rows.Capacity)));

    private void Evict()
    {
        int window = Math.Min(EvictionWindow, _rows.Capacity);
        var clocks = _clocks.AsSpan(0, window);
        int first = _hand;
        for (int i = 0; i < window; i++) clocks[i] = RowPool.ClockOf(_rows[(first + i) % _rows.Capacity]);
        clocks.Sort();
        int wanted = Math.Max(1, window * EvictedOfWindow / EvictionWindow);
        long newest = clocks[wanted - 1];
        for (int i = 0; i < window && wanted > 0; i++)
        {
            int row = (first + i) % _rows.Capacity;
            if (RowPool.ClockOf(_rows[row]) > newest || RowPool.KeyOf(_rows[row]) == 0) continue;
            PutOut(_rows[row]);
            FindInMemory(RowPool.KeyOf(_rows[row]), out int place);
            _index.RemoveAt(place);
            _rows.Free(row);
            wanted--;
        }
        _hand = (first + window) % _rows.Capacity;
    }

    private void PutOut(Span<double> row)
    {
        Evictions++;
        if (RowPool.ClockOf(row) < ForgettableMicroseconds) return;
        // Many rows end in zeros, as where few of the values that a row has room for have been seen.
        var words = MemoryMarshal.Cast<double, ulong>(row);
        archive!.Write(EvictedPart, (long)words[0], MemoryMarshal.AsBytes(words[..(words.LastIndexOfAnyExcept(0ul) + 1)]));
    }

    private bool TryMakeRoomFor(long block)
    {
        while (_rows.Chunks < _rows.ChunksFor(block))
        {
            if (archive is not null && !TryGrow()) return false;
            _rows.AddChunk();
        }
        return true;
    }

    private void LoadBlock(long number, byte[] bytes)
    {
        int first = _rows.Load(number, bytes);
        for (int row = first; row < first + _rows.RowsPerBlock; row++)
        {
            ulong key = RowPool.KeyOf(_rows[row]);
            if (key == 0) _rows.Skip(row);
            else _index.Add(key, row);
        }
    }

    /// <summary>Where a state was saved with more memory than there is now.</summary>
    private void PutOut(long number, byte[] bytes)
    {
        var rows = MemoryMarshal.Cast<byte, double>(bytes.AsSpan());
        for (; rows.Length > 0; rows = rows[_rows.Words..])
            if (RowPool.KeyOf(rows[.._rows.Words]) != 0) PutOut(rows[.._rows.Words]);
        _blocksToRemove.Add(number);
    }
}
