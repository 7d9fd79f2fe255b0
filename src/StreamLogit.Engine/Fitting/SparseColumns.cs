namespace StreamLogit.Engine.Fitting;

/// <summary>
/// The slots that rows use, numbered as columns in the order in which they come up. Memory goes with the slots used, not with all there are.
/// Several <see cref="SparseRows"/> that are fitted together share one.
/// </summary>
public sealed class SparseColumns
{
    private readonly Dictionary<int, int> _columnOfSlot = [];
    private readonly List<int> _slots = [];

    /// <summary>Columns so far.</summary>
    public int Count => _slots.Count;

    /// <summary>The slot of a column.</summary>
    public int SlotOf(int column) => _slots[column];

    /// <summary>The column of a slot, or false if no row has used it.</summary>
    public bool TryFind(int slot, out int column) => _columnOfSlot.TryGetValue(slot, out column);

    internal int ColumnOf(int slot)
    {
        if (_columnOfSlot.TryGetValue(slot, out int column)) return column;
        column = _slots.Count;
        _columnOfSlot.Add(slot, column);
        _slots.Add(slot);
        return column;
    }
}
