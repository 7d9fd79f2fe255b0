using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health;

/// <summary>The window of the last labels, however long ago they came: a ring.</summary>
/// <param name="window">How many labels it has.</param>
internal sealed class LastLabels(int window)
{
    private const string Part = "health/last";
    private const int LabelsPerBlock = 256;
    private readonly LastLabel[] _labels = new LastLabel[window];
    private readonly DirtyBlocks _dirty = new(window, LabelsPerBlock);
    private long _firstKnown; // the ring may have been shorter once
    private int _place; // of the next one
    private int _obsoleteBlocks;

    /// <summary>Labels ever added.</summary>
    public long Added { get; private set; }

    /// <summary>The number, counted from 0, of the oldest label in the window.</summary>
    public long First => Math.Max(_firstKnown, Added - window);

    public void Add(LabelRun run)
    {
        for (int first = 0; first < run.Count;)
        {
            // As many as share a block.
            int room = Math.Min(window, (_place | (LabelsPerBlock - 1)) + 1) - _place;
            int count = Math.Min(run.Count - first, room);
            run.CopyTo(_labels.AsSpan(_place, count), first);
            _dirty.Mark(_place);
            _place = _place + count == window ? 0 : _place + count;
            Added += count;
            first += count;
        }
    }

    /// <summary>The label of a number in the window.</summary>
    public ref readonly LastLabel this[long number] => ref _labels[number % window];

    /// <summary>Puts another in the place of a label, if that is in the window.</summary>
    public void Replace(long number, in LastLabel label)
    {
        if (number < First || number >= Added) return;
        int place = (int)(number % window);
        _labels[place] = label;
        _dirty.Mark(place);
    }

    public void Save(StateBlocks changes)
    {
        for (; _obsoleteBlocks > _dirty.Count; _obsoleteBlocks--) changes.Remove(Part, _obsoleteBlocks - 1);
        ReadOnlySpan<long> head = [window, Added, _firstKnown];
        changes.Put(Part, -1, MemoryMarshal.AsBytes(head));
        foreach (var (number, range) in _dirty.Take())
            changes.Put(Part, number, MemoryMarshal.AsBytes(_labels.AsSpan(range)));
    }

    /// <summary>Takes up the labels; where the ring had another length, as many of them as there are and fit.</summary>
    public void Load(StateBlocks state)
    {
        byte[] head = state.Find(Part, -1) ?? throw new InvalidStateException($"the state has no {Part}");
        var numbers = MemoryMarshal.Cast<byte, long>(head);
        (long length, long added, long firstKnown) = (numbers[0], numbers[1], numbers[2]);
        var saved = new LastLabel[length];
        foreach (var (number, bytes) in state.Read(Part))
        {
            if (number < 0) continue;
            if (number * LabelsPerBlock >= length) throw new InvalidStateException($"block {number} of {Part} lies outside of its ring");
            MemoryMarshal.Cast<byte, LastLabel>(bytes).CopyTo(saved.AsSpan((int)number * LabelsPerBlock));
            _obsoleteBlocks = (int)number + 1;
        }
        _firstKnown = Math.Max(firstKnown, added - Math.Min(length, window));
        for (long i = _firstKnown; i < added; i++) _labels[i % window] = saved[i % length];
        Added = added;
        _place = (int)(added % window);
        if (length != window) _dirty.MarkAll();
    }
}
