using StreamLogit.Engine.Features;

namespace StreamLogit.Benchmarks.Learning;

/// <summary>Labelled rows of 12 entries that are encoded already: the first ones dense, the others hashed, spread evenly over all slots.</summary>
internal sealed class EncodedRows
{
    public const int Entries = 12;
    private readonly int[] _slots;
    private readonly double[] _values;
    private readonly int[] _labels;

    /// <param name="count">Rows.</param>
    /// <param name="hashedSlots">Slots of the hashed entries; the dense ones lie behind them.</param>
    /// <param name="hashedEntries">Hashed entries of a row, 0 to 12.</param>
    public EncodedRows(int count, int hashedSlots, int hashedEntries)
    {
        Count = count;
        FirstDenseSlot = hashedSlots;
        SlotCount = hashedSlots + Entries - hashedEntries;
        _slots = new int[count * Entries];
        _values = new double[count * Entries];
        _labels = new int[count];
        var random = new Random(1);
        for (int row = 0; row < count; row++)
        {
            double logOdds = -2;
            for (int i = 0; i < Entries; i++)
            {
                int place = row * Entries + i;
                bool isHashed = i >= Entries - hashedEntries;
                _slots[place] = isHashed ? random.Next(hashedSlots) : FirstDenseSlot + i;
                _values[place] = isHashed ? 1 : random.NextDouble() * 2 - 1;
                logOdds += isHashed ? 0 : _values[place] * (i % 3 - 1);
            }
            _labels[row] = random.NextDouble() < 1 / (1 + Math.Exp(-logOdds)) ? 1 : 0;
        }
    }

    public int Count { get; }

    public int FirstDenseSlot { get; }

    public int SlotCount { get; }

    public EncodedVector this[int row] =>
        new(_slots.AsSpan(row * Entries, Entries), _values.AsSpan(row * Entries, Entries));

    public int Label(int row) => _labels[row];
}
