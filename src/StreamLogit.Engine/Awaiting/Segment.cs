using System.Numerics;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// A run of events in the order in which they were scored. Its bytes are only ever added to, and may be away in the archive; what became of the events
/// is marked beside them.
/// </summary>
internal sealed class Segment
{
    /// <summary>The bytes of a segment, unless its only event needs more. The less, the less is read for a label whose event is in the archive.</summary>
    public const int UsualBytes = 1 << 14;

    private SegmentMark[] _marks = []; // of those events that have one, in the order in which they got it
    private ushort[] _markOf = []; // for each event, one more than the place of its mark, or 0
    private int _marked;
    private int _savedMarks; // of them from the front

    /// <summary>The events, or null while they are in the archive only.</summary>
    public byte[]? Bytes { get; set; }

    /// <summary>Bytes in use.</summary>
    public int Length { get; private set; }

    /// <summary>Events.</summary>
    public int Count { get; private set; }

    /// <summary>Whether events were added since it was last written.</summary>
    public bool HasNewEvents { get; set; }

    /// <summary>Whether marks were made since they were last taken to be saved.</summary>
    public bool HasNewMarks => _savedMarks < _marked;

    /// <summary>Events at the front that were not kept any longer when a state was saved.</summary>
    public int Passed { get; set; }

    public bool HasRoom(int size) => Bytes is not null && Bytes.Length - Length >= size;

    /// <summary>Makes room for one more event and returns where it is to be written.</summary>
    public int Append(int size)
    {
        Count++;
        HasNewEvents = true;
        int offset = Length;
        Length += size;
        return offset;
    }

    /// <summary>Asks for the memory in which a mark is looked up.</summary>
    public void WantMark(int ordinal)
    {
        if (ordinal < _markOf.Length) CacheHint.Want(in _markOf[ordinal]);
    }

    public LabelMark MarkOf(int ordinal) => PlaceOf(ordinal) is var place and >= 0 ? _marks[place].ToMark() : default;

    /// <summary>Whether an event has a mark, which says that it awaits no label. Costs less than to read the mark.</summary>
    public bool IsMarked(int ordinal) => PlaceOf(ordinal) >= 0;

    public void Mark(int ordinal, in LabelMark mark)
    {
        int place = PlaceOf(ordinal);
        if (place < 0)
        {
            place = _marked++;
            if (place == _marks.Length) Array.Resize(ref _marks, Math.Max(4, 2 * place));
            SetPlace(ordinal, place);
        }
        _marks[place] = new SegmentMark(ordinal, mark);

        // A correction is rare: all marks of the segment are saved again.
        if (place < _savedMarks) _savedMarks = 0;
    }

    /// <summary>The marks to be saved.</summary>
    public ReadOnlySpan<SegmentMark> TakeNewMarks()
    {
        var marks = _marks.AsSpan(_savedMarks.._marked);
        _savedMarks = _marked;
        return marks;
    }

    /// <summary>Takes up a mark that was saved; a later one of the same event replaces it.</summary>
    /// <returns>Whether it is the first mark of an event that is still kept.</returns>
    public bool LoadMark(in SegmentMark mark)
    {
        if (mark.Ordinal >= Count) throw new InvalidStateException($"a segment of {Count} events has a mark of event {mark.Ordinal}");
        if (mark.Ordinal < Passed) return false;
        bool isFirst = !IsMarked(mark.Ordinal);
        Mark(mark.Ordinal, mark.ToMark());
        _savedMarks = _marked;
        return isFirst;
    }

    /// <summary>Empties it for new events.</summary>
    public void Clear()
    {
        _markOf.AsSpan().Clear();
        Length = Count = Passed = _marked = _savedMarks = 0;
        HasNewEvents = false;
    }

    private int PlaceOf(int ordinal) => ordinal < _markOf.Length ? _markOf[ordinal] - 1 : -1;

    private void SetPlace(int ordinal, int place)
    {
        if (ordinal >= _markOf.Length) Array.Resize(ref _markOf, (int)BitOperations.RoundUpToPowerOf2((uint)Math.Max(Count, ordinal + 1)));
        _markOf[ordinal] = (ushort)(place + 1);
    }
}
