using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Health.RollUps;

/// <summary>Cells of a few doubles each, most of them 0. It knows which cells are in use, so that clearing and adding up cost only those.</summary>
/// <param name="cells">How many cells.</param>
/// <param name="width">Doubles of a cell.</param>
internal sealed class Tally(int cells, int width)
{
    private readonly double[] _values = new double[cells * width];
    private readonly ulong[] _used = new ulong[(cells + 63) / 64];

    public int Cells => cells;

    public int Width => width;

    /// <summary>Cells in use.</summary>
    public int Count
    {
        get
        {
            int count = 0;
            foreach (ulong word in _used) count += BitOperations.PopCount(word);
            return count;
        }
    }

    public bool IsEmpty => !_used.AsSpan().ContainsAnyExcept(0ul);

    /// <summary>The first double of a cell, which counts as in use from now on.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public ref double Use(int cell)
    {
        _used[cell >> 6] |= 1ul << cell;
        return ref _values[cell * width];
    }

    /// <summary>The doubles of a cell.</summary>
    public ReadOnlySpan<double> this[int cell] => _values.AsSpan(cell * width, width);

    /// <summary>The next cell in use from <paramref name="cell"/> on, or -1.</summary>
    public int NextUsed(int cell)
    {
        if (cell >= cells) return -1;
        int word = cell >> 6;
        ulong bits = _used[word] & (ulong.MaxValue << cell);
        while (bits == 0)
        {
            if (++word == _used.Length) return -1;
            bits = _used[word];
        }
        return word * 64 + BitOperations.TrailingZeroCount(bits);
    }

    public void Add(Tally other)
    {
        for (int word = 0; word < _used.Length; word++)
        {
            ulong bits = other._used[word];
            _used[word] |= bits;
            for (; bits != 0; bits &= bits - 1)
            {
                int first = (word * 64 + BitOperations.TrailingZeroCount(bits)) * width;
                AddTo(ref _values[first], ref other._values[first]);
            }
        }
    }

    public void Add(int cell, ReadOnlySpan<double> values) => AddTo(ref Use(cell), ref MemoryMarshal.GetReference(values[..width]));

    /// <summary>Copies the cells in use, one behind the other, into a ring.</summary>
    /// <param name="cellNumbers">Receives their numbers; its length is a power of two.</param>
    /// <param name="values">Receives their doubles.</param>
    /// <param name="place">Where in the ring they start.</param>
    public void CopyTo(int[] cellNumbers, double[] values, long place)
    {
        for (int word = 0; word < _used.Length; word++)
        {
            for (ulong bits = _used[word]; bits != 0; bits &= bits - 1)
            {
                int cell = word * 64 + BitOperations.TrailingZeroCount(bits);
                int at = (int)place++ & (cellNumbers.Length - 1);
                cellNumbers[at] = cell;
                ref double source = ref _values[cell * width];
                ref double target = ref values[at * width];
                if (width == 4) Vector256.LoadUnsafe(ref source).StoreUnsafe(ref target);
                else for (int i = 0; i < width; i++) Unsafe.Add(ref target, i) = Unsafe.Add(ref source, i);
            }
        }
    }

    public void Clear()
    {
        for (int word = 0; word < _used.Length; word++)
        {
            for (ulong bits = _used[word]; bits != 0; bits &= bits - 1)
            {
                ref double first = ref _values[(word * 64 + BitOperations.TrailingZeroCount(bits)) * width];
                if (width == 4) Vector256<double>.Zero.StoreUnsafe(ref first);
                else for (int i = 0; i < width; i++) Unsafe.Add(ref first, i) = 0;
            }
            _used[word] = 0;
        }
    }

    public void Save(BinaryWriter writer)
    {
        writer.Write(Count);
        for (int cell = NextUsed(0); cell >= 0; cell = NextUsed(cell + 1))
        {
            writer.Write(cell);
            foreach (double value in this[cell]) writer.Write(value);
        }
    }

    /// <summary>Adds what <see cref="Save"/> wrote.</summary>
    public void Load(BinaryReader reader)
    {
        var values = new double[width];
        for (int count = reader.ReadInt32(); count > 0; count--)
        {
            int cell = reader.ReadInt32();
            if (cell < 0 || cell >= cells) throw new Persistence.InvalidStateException($"cell {cell} lies outside of its tally");
            foreach (ref double value in values.AsSpan()) value = reader.ReadDouble();
            Add(cell, values);
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void AddTo(ref double target, ref double values)
    {
        if (width == 4) (Vector256.LoadUnsafe(ref target) + Vector256.LoadUnsafe(ref values)).StoreUnsafe(ref target);
        else for (int i = 0; i < width; i++) Unsafe.Add(ref target, i) += Unsafe.Add(ref values, i);
    }
}
