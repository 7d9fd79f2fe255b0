namespace StreamLogit.Engine.Learning;

/// <summary>Runs of slots that are saved together: which of them were ever written, and which since they were last saved.</summary>
internal sealed class SlotBlocks
{
    private const byte Touched = 1;
    private const byte Changed = 2;
    private readonly byte[] _flags;
    private readonly int _shift;

    /// <param name="slotCount">Slots in use.</param>
    /// <param name="doublesPerSlot">What a slot takes in all tables together; it decides how many slots make a block.</param>
    public SlotBlocks(int slotCount, int doublesPerSlot)
    {
        SlotCount = slotCount;

        // 8 to 16 KiB: large enough for few writes, small enough that a commit writes little that has not changed.
        while (_shift < 10 && (2L << _shift) * Math.Max(doublesPerSlot, 1) * sizeof(double) <= 16 * 1024) _shift++;
        _flags = new byte[((slotCount - 1) >> _shift) + 1];
    }

    public int SlotCount { get; }

    public int SlotsPerBlock => 1 << _shift;

    public int Count => _flags.Length;

    /// <summary>Slots in all blocks, the last of which may reach beyond the slots in use.</summary>
    public int PaddedSlotCount => Count << _shift;

    /// <summary>Checks that all slots are inside of the tables.</summary>
    /// <exception cref="ArgumentOutOfRangeException">One is not. Whoever reads the tables by reference relies on this check.</exception>
    public void Check(ReadOnlySpan<int> slots)
    {
        uint greatest = 0;
        foreach (int slot in slots) greatest = Math.Max(greatest, (uint)slot);
        if (greatest >= (uint)SlotCount && !slots.IsEmpty) ThrowOutOfRange(greatest);
    }

    /// <summary>Notes that these slots are about to be written.</summary>
    /// <exception cref="IndexOutOfRangeException">A slot is outside of the tables. Whoever writes them by reference relies on this check.</exception>
    public void Mark(ReadOnlySpan<int> slots)
    {
        byte[] flags = _flags;
        int shift = _shift;
        foreach (int slot in slots) flags[slot >> shift] = Touched | Changed;
    }

    /// <summary>Notes that every slot that was ever written is about to be written again.</summary>
    public void MarkAllTouched()
    {
        for (int block = 0; block < _flags.Length; block++)
            if (_flags[block] != 0) _flags[block] = Touched | Changed;
    }

    /// <summary>Notes that a block is about to be written.</summary>
    public void MarkBlock(int block) => _flags[block] = Touched | Changed;

    /// <summary>Notes that a block stands in the saved state.</summary>
    public void MarkSaved(int block) => _flags[block] = Touched;

    /// <summary>Notes that every block that was ever written stands in the saved state.</summary>
    public void MarkAllSaved()
    {
        for (int block = 0; block < _flags.Length; block++) _flags[block] &= Touched;
    }

    public bool IsTouched(int block) => _flags[block] != 0;

    public bool IsChanged(int block) => (_flags[block] & Changed) != 0;

    private void ThrowOutOfRange(uint slot) =>
        throw new ArgumentOutOfRangeException(nameof(slot), $"Slot {(int)slot} is not one of the {SlotCount} slots.");
}
