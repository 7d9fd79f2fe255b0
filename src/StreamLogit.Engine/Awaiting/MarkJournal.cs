using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// What became of the kept events, as it is saved: marks in the order in which they were saved, so that labels for events of long ago, which lie
/// all over the segments, are written side by side. A later mark of an event replaces an earlier one. A block leaves when all its events have left.
/// </summary>
internal sealed class MarkJournal
{
    public const string Part = "awaiting/marks";
    private const int BlockMarks = 512;

    private readonly Queue<(long Number, int LastSegment)> _full = [];
    private readonly Entry[] _open = new Entry[BlockMarks];
    private long _openNumber;
    private int _count;
    private int _saved; // of the open block
    private int _lastSegment; // of the open block

    /// <summary>Adds marks of a segment, and saves the blocks that become full.</summary>
    public void Add(StateBlocks changes, int segment, ReadOnlySpan<SegmentMark> marks)
    {
        foreach (ref readonly var mark in marks)
        {
            Append(segment, mark);
            if (_count < BlockMarks) continue;
            changes.Put(Part, _openNumber, MemoryMarshal.AsBytes(_open.AsSpan()));
            Close();
        }
    }

    /// <summary>Saves what is not saved yet, and removes the blocks that speak only of segments that are gone.</summary>
    public void Save(StateBlocks changes, int firstSegment)
    {
        if (_saved < _count) changes.Put(Part, _openNumber, MemoryMarshal.AsBytes(_open.AsSpan(0, _count)));
        _saved = _count;
        while (_full.TryPeek(out var block) && block.LastSegment < firstSegment) changes.Remove(Part, _full.Dequeue().Number);
    }

    /// <summary>Takes up a saved journal: the marks of the segments from the first one on, in their order.</summary>
    public IEnumerable<(int Segment, SegmentMark Mark)> Load(StateBlocks state, int firstSegment)
    {
        foreach (var (number, bytes) in state.Read(Part))
        {
            if (_count == BlockMarks) Close();
            _openNumber = number;
            _count = _lastSegment = 0;
            foreach (var entry in MemoryMarshal.Cast<byte, Entry>(bytes).ToArray())
            {
                Append(entry.Segment, entry.Mark);
                if (entry.Segment >= firstSegment) yield return (entry.Segment, entry.Mark);
            }
        }
        if (_count == BlockMarks) Close();
        _saved = _count;
    }

    private void Append(int segment, in SegmentMark mark)
    {
        _open[_count++] = new Entry { Mark = mark, Segment = segment };
        _lastSegment = Math.Max(_lastSegment, segment);
    }

    private void Close()
    {
        _full.Enqueue((_openNumber++, _lastSegment));
        _count = _saved = _lastSegment = 0;
    }

    private struct Entry
    {
        public SegmentMark Mark;
        public int Segment;
    }
}
