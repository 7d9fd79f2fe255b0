namespace StreamLogit.Engine.Learning;

/// <summary>One row of doubles for every slot, all zero at first. A row of eight lies in one cache line.</summary>
internal sealed class SlotTable
{
    private const int MostDoubles = 0x7FFFFFC7 - 64;
    private readonly AlignedDoubles _values;

    /// <param name="slotCount">Rows.</param>
    /// <param name="rowLength">Doubles in a row.</param>
    /// <exception cref="ArgumentException">The table is larger than an array can be.</exception>
    public SlotTable(int slotCount, int rowLength)
    {
        if ((long)slotCount * rowLength > MostDoubles)
            throw new ArgumentException($"{slotCount} slots with {rowLength} numbers each are too many for one table.");
        RowLength = rowLength;
        _values = new AlignedDoubles(slotCount * rowLength);
    }

    /// <summary>Doubles in a row.</summary>
    public int RowLength { get; }

    /// <summary>The first double of slot 0.</summary>
    public ref double First => ref _values.First;

    /// <summary>The rows from <paramref name="slot"/> on.</summary>
    public Span<double> Rows(int slot, int count) => _values.Span.Slice(slot * RowLength, count * RowLength);
}
