using System.Numerics;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>
/// Rows of doubles, as many as there are keys in memory. The first word of a row is the hash of its key, 0 in a free row. Rows lie in chunks that never
/// move, so that growing copies nothing; their changed blocks are saved.
/// </summary>
internal sealed class RowPool
{
    private const int ChunkBytes = 1 << 17;
    private const int BlockBytes = 1 << 12;
    private const int CacheLineBytes = 64;

    private readonly string _part;
    private readonly int _rowsPerChunkShift;
    private readonly int _rowsPerBlockShift;
    private readonly List<double[]> _chunks = [];
    private readonly List<int> _starts = []; // where the first row of a chunk begins, at a cache line
    private readonly Stack<int> _free = [];
    private bool[] _isDirty = [];
    private int _unused; // rows from here on were never used

    /// <param name="words">Doubles that a row needs.</param>
    /// <param name="part">The part of the state.</param>
    public RowPool(int words, string part)
    {
        Words = Padded(words);
        _part = part;
        _rowsPerChunkShift = int.Log2(Math.Max(1, ChunkBytes / RowBytes));
        _rowsPerBlockShift = int.Log2(Math.Max(1, BlockBytes / RowBytes));
    }

    /// <summary>Doubles in a row.</summary>
    public int Words { get; }

    public int RowBytes => Words * sizeof(double);

    /// <summary>Rows that there is room for.</summary>
    public int Capacity => _chunks.Count << _rowsPerChunkShift;

    public int RowsPerChunk => 1 << _rowsPerChunkShift;

    public int RowsPerBlock => 1 << _rowsPerBlockShift;

    public bool HasRoom => _free.Count > 0 || _unused < Capacity;

    public Span<double> this[int row] => _chunks[row >> _rowsPerChunkShift].AsSpan(
        _starts[row >> _rowsPerChunkShift] + (row & (RowsPerChunk - 1)) * Words, Words);

    public static ref ulong KeyOf(Span<double> row) => ref MemoryMarshal.Cast<double, ulong>(row)[0];

    /// <summary>The time of the key's newest event, in microseconds; the second word.</summary>
    public static ref long ClockOf(Span<double> row) => ref MemoryMarshal.Cast<double, long>(row)[1];

    public void MarkChanged(int row) => _isDirty[row >> _rowsPerBlockShift] = true;

    public void AddChunk()
    {
        double[] chunk = GC.AllocateArray<double>((Words << _rowsPerChunkShift) + CacheLineBytes / sizeof(double), pinned: true);
        _chunks.Add(chunk);
        _starts.Add(StartOf(chunk));
        Array.Resize(ref _isDirty, ((Capacity - 1) >> _rowsPerBlockShift) + 1);
    }

    /// <summary>Takes a free row, all zero.</summary>
    public int Take() => _free.TryPop(out int row) ? row : _unused++;

    /// <summary>Gives a row back.</summary>
    public void Free(int row)
    {
        this[row].Clear();
        MarkChanged(row);
        _free.Push(row);
    }

    public void Save(StateBlocks changes)
    {
        for (int block = 0; block < _isDirty.Length; block++)
        {
            if (!_isDirty[block]) continue;
            _isDirty[block] = false;
            changes.Put(_part, block, MemoryMarshal.AsBytes(Rows(block)));
        }
    }

    /// <summary>The saved blocks, which must be taken up in their order.</summary>
    public IEnumerable<(long Number, byte[] Bytes)> Saved(StateBlocks state) => state.Read(_part);

    /// <summary>Takes up a saved block. There must be room for it.</summary>
    /// <returns>The first of its rows.</returns>
    public int Load(long number, byte[] bytes)
    {
        if (bytes.Length != RowBytes << _rowsPerBlockShift)
            throw new InvalidStateException($"block {number} of {_part} has {bytes.Length} bytes, not {RowBytes << _rowsPerBlockShift}");
        MemoryMarshal.Cast<byte, double>(bytes).CopyTo(Rows((int)number));
        int first = (int)number << _rowsPerBlockShift;
        for (; _unused < first; _unused++) _free.Push(_unused); // blocks that hold no row are not saved
        _unused = first + RowsPerBlock;
        return first;
    }

    /// <summary>Says that a row of a block that was loaded is free.</summary>
    public void Skip(int row) => _free.Push(row);

    /// <summary>Takes a block out of the state whose rows went elsewhere.</summary>
    public void Remove(long number, StateBlocks changes) => changes.Remove(_part, number);

    /// <summary>The chunks that blocks up to this one need.</summary>
    public int ChunksFor(long number) => (int)(((number + 1) << _rowsPerBlockShift) + RowsPerChunk - 1 >> _rowsPerChunkShift);

    public int Chunks => _chunks.Count;

    /// <summary>Bytes that a chunk takes.</summary>
    public long BytesPerChunk => ((long)Words << _rowsPerChunkShift) * sizeof(double);

    private Span<double> Rows(int block)
    {
        int first = block << _rowsPerBlockShift;
        int chunk = first >> _rowsPerChunkShift;
        return _chunks[chunk].AsSpan(_starts[chunk] + (first & (RowsPerChunk - 1)) * Words, Words << _rowsPerBlockShift);
    }

    // A row that fits into a cache line must not lie across two.
    private static int Padded(int words) => words <= 8 ? (int)BitOperations.RoundUpToPowerOf2((uint)words) : (words + 7) / 8 * 8;

    private static unsafe int StartOf(double[] chunk)
    {
        fixed (double* first = chunk)
            return (int)((CacheLineBytes - (nint)first % CacheLineBytes) % CacheLineBytes / sizeof(double));
    }
}
