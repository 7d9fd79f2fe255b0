using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health;

/// <summary>The window of the last labels, however long ago they came.</summary>
internal sealed class LastLabels(int capacity)
{
    private const string Part = "health/last";
    private readonly LabelSums[] _labels = new LabelSums[capacity];
    private readonly DirtyBlocks _dirty = new(capacity, slotsPerBlock: 512);
    private long _added;

    /// <returns>The label's number among all, which wraps.</returns>
    public uint Add(in LabelSums label)
    {
        Put(_added, label);
        return (uint)_added++;
    }

    /// <summary>Puts other sums in the place of those of a label, if that is among the last.</summary>
    public void Replace(uint sequence, in LabelSums label)
    {
        long ago = (uint)_added - sequence;
        if (ago <= capacity && ago <= _added) Put(_added - ago, label);
    }

    public LabelSums Window()
    {
        var sums = new LabelSums();
        foreach (ref readonly var label in _labels.AsSpan()) sums.Add(label);
        return sums;
    }

    public void Save(StateBlocks changes)
    {
        ReadOnlySpan<long> head = [capacity, _added];
        changes.Put(Part, -1, MemoryMarshal.AsBytes(head));
        foreach (var (number, range) in _dirty.Take())
            changes.Put(Part, number, MemoryMarshal.AsBytes(_labels.AsSpan(range)));
    }

    /// <summary>Takes up the labels; where the window had another length, it starts empty.</summary>
    public void Load(StateBlocks state)
    {
        byte[] head = state.Find(Part, -1) ?? throw new InvalidStateException($"the state has no {Part}");
        if (MemoryMarshal.Cast<byte, long>(head)[0] != capacity)
        {
            _dirty.MarkAll();
            return;
        }
        _added = MemoryMarshal.Cast<byte, long>(head)[1];
        foreach (var (number, bytes) in state.Read(Part))
            if (number >= 0) bytes.CopyTo(MemoryMarshal.AsBytes(_labels.AsSpan(_dirty.RangeOf(number))));
    }

    private void Put(long number, in LabelSums label)
    {
        int place = (int)(number % capacity);
        _labels[place] = label;
        _dirty.Mark(place);
    }
}
