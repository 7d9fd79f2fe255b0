using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Features;

/// <summary>What is known of every coefficient slot apart from its weights: which feature's value took it first, and the sum of its values.</summary>
internal sealed class SlotLedger(int slotCount)
{
    private const string Part = "features/slots";
    private readonly Entry[] _entries = new Entry[slotCount];
    private readonly DirtyBlocks _dirty = new(slotCount, slotsPerBlock: 1024);

    public int SlotCount => _entries.Length;

    public bool IsUsed(int slot) => _entries[slot].Tag != 0;

    /// <summary>The place in the definition of the feature whose value took a hashed slot first, or -1 where none has.</summary>
    public int OwnerOf(int slot) => (int)_entries[slot].OwnerPlusOne - 1;

    /// <returns>The sum of the slot's values before this one.</returns>
    public double AddDense(int slot, double value)
    {
        ref var entry = ref _entries[slot];
        double before = entry.ValueSum;
        entry.ValueSum = before + value;
        entry.Tag = 1;
        _dirty.Mark(slot);
        return before;
    }

    /// <param name="slot">The slot.</param>
    /// <param name="tag">Further bits of the value's hash, not 0, by which values that share a slot are told apart.</param>
    /// <param name="feature">The place of the value's feature in the definition.</param>
    /// <param name="value">The value there.</param>
    /// <param name="sumBefore">The sum of the slot's values before.</param>
    public SlotUse AddHashed(int slot, uint tag, int feature, double value, out double sumBefore)
    {
        ref var entry = ref _entries[slot];
        sumBefore = entry.ValueSum;
        entry.ValueSum = sumBefore + value;
        _dirty.Mark(slot);
        if (entry.Tag == tag) return SlotUse.Again;
        if (entry.Tag != 0) return SlotUse.Collision;
        entry.Tag = tag;
        entry.OwnerPlusOne = (uint)feature + 1;
        return SlotUse.First;
    }

    public void Save(StateBlocks changes)
    {
        foreach (var (number, range) in _dirty.Take())
            changes.Put(Part, number, MemoryMarshal.AsBytes(_entries.AsSpan(range)));
    }

    public void Load(StateBlocks state)
    {
        foreach (var (number, bytes) in state.Read(Part))
        {
            var block = MemoryMarshal.AsBytes(_entries.AsSpan(_dirty.RangeOf(number)));
            if (block.Length != bytes.Length) throw new InvalidStateException($"block {number} of {Part} has {bytes.Length} bytes, not {block.Length}");
            bytes.CopyTo(block);
        }
    }

    // One cache line holds four: an event touches one line per entry.
    private struct Entry
    {
        public double ValueSum;
        public uint Tag;
        public uint OwnerPlusOne;
    }
}
