using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Learning;

/// <summary>One row of doubles for every slot, all zero at first. Pinned and aligned, so that a row of eight lies in one cache line.</summary>
internal sealed class SlotTable
{
    private const int CacheLineBytes = 64;
    private readonly double[] _values;
    private readonly int _aligned;

    /// <param name="slotCount">Rows.</param>
    /// <param name="rowLength">Doubles in a row.</param>
    /// <exception cref="ArgumentException">The table is larger than an array can be.</exception>
    public SlotTable(int slotCount, int rowLength)
    {
        long length = (long)slotCount * rowLength + CacheLineBytes / sizeof(double);
        if (length > Array.MaxLength)
            throw new ArgumentException($"{slotCount} slots with {rowLength} numbers each are too many for one table.");
        RowLength = rowLength;
        _values = GC.AllocateArray<double>((int)length, pinned: true);
        nint address;
        unsafe
        {
            address = (nint)Unsafe.AsPointer(ref MemoryMarshal.GetArrayDataReference(_values));
        }
        _aligned = (int)(-address & (CacheLineBytes - 1)) / sizeof(double);
    }

    /// <summary>Doubles in a row.</summary>
    public int RowLength { get; }

    /// <summary>The first double of slot 0.</summary>
    public ref double First => ref Unsafe.Add(ref MemoryMarshal.GetArrayDataReference(_values), _aligned);

    /// <summary>The rows from <paramref name="slot"/> on.</summary>
    public Span<double> Rows(int slot, int count) => _values.AsSpan(_aligned + slot * RowLength, count * RowLength);
}
