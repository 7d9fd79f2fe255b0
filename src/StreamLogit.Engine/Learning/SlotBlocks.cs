using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

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
    /// <exception cref="ArgumentOutOfRangeException">One is not. Whoever reaches the tables by reference relies on this check.</exception>
    public void Check(ReadOnlySpan<int> slots)
    {
        ref uint first = ref Unsafe.As<int, uint>(ref MemoryMarshal.GetReference(slots));
        nuint count = (nuint)slots.Length, i = 0;
        uint greatest = 0;
        if (Vector128.IsHardwareAccelerated && count >= (nuint)Vector128<uint>.Count)
        {
            Vector128<uint> most = Vector128.LoadUnsafe(ref first);
            for (i = 4; i + 4 <= count; i += 4) most = Vector128.Max(most, Vector128.LoadUnsafe(ref first, i));
            greatest = Math.Max(Math.Max(most[0], most[1]), Math.Max(most[2], most[3]));
        }
        for (; i < count; i++) greatest = Math.Max(greatest, Unsafe.Add(ref first, i));
        if (greatest >= (uint)SlotCount && count > 0) ThrowOutOfRange(greatest);
    }

    /// <summary>Notes that these slots are about to be written, and checks them.</summary>
    /// <exception cref="ArgumentOutOfRangeException">A slot is outside of the tables.</exception>
    public void Mark(ReadOnlySpan<int> slots)
    {
        Check(slots);
        ref int first = ref MemoryMarshal.GetReference(slots);
        ref byte flags = ref MemoryMarshal.GetArrayDataReference(_flags);
        int shift = _shift;
        nuint count = (nuint)slots.Length, i = 0;
        for (; i + 4 <= count; i += 4)
        {
            Unsafe.Add(ref flags, (uint)Unsafe.Add(ref first, i) >> shift) = Touched | Changed;
            Unsafe.Add(ref flags, (uint)Unsafe.Add(ref first, i + 1) >> shift) = Touched | Changed;
            Unsafe.Add(ref flags, (uint)Unsafe.Add(ref first, i + 2) >> shift) = Touched | Changed;
            Unsafe.Add(ref flags, (uint)Unsafe.Add(ref first, i + 3) >> shift) = Touched | Changed;
        }
        for (; i < count; i++) Unsafe.Add(ref flags, (uint)Unsafe.Add(ref first, i) >> shift) = Touched | Changed;
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
