using System.Numerics;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// A run of events in the order in which they were scored. Its bytes are only ever added to, and may be away in the archive; what became of the events
/// is marked beside them.
/// </summary>
internal sealed class Segment
{
    private LabelMark[] _marks = [];
    private int _marked; // one more than the last event that has a mark

    /// <summary>The events, or null while they are in the archive only.</summary>
    public byte[]? Bytes { get; set; }

    /// <summary>Bytes in use.</summary>
    public int Length { get; private set; }

    /// <summary>Events.</summary>
    public int Count { get; private set; }

    /// <summary>Whether events were added since it was last written.</summary>
    public bool HasNewEvents { get; set; }

    /// <summary>Whether marks were made since they were last written.</summary>
    public bool HasNewMarks { get; set; }

    /// <summary>The marks made so far: events behind the last marked one may have none.</summary>
    public ReadOnlySpan<LabelMark> Marks => _marks.AsSpan(0, _marked);

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

    /// <summary>Asks for the memory of a mark.</summary>
    public void WantMark(int ordinal)
    {
        if (ordinal < _marked) CacheHint.Want(in _marks[ordinal]);
    }

    public LabelMark MarkOf(int ordinal) => ordinal < _marked ? _marks[ordinal] : default;

    public void Mark(int ordinal, in LabelMark mark)
    {
        if (ordinal >= _marks.Length) Array.Resize(ref _marks, (int)BitOperations.RoundUpToPowerOf2((uint)Count));
        _marks[ordinal] = mark;
        _marked = Math.Max(_marked, ordinal + 1);
        HasNewMarks = true;
    }

    /// <summary>Takes up marks that were saved.</summary>
    public void LoadMarks(ReadOnlySpan<LabelMark> marks)
    {
        _marks = marks.ToArray();
        _marked = marks.Length;
    }

    /// <summary>Empties it for new events.</summary>
    public void Clear()
    {
        _marks.AsSpan(0, _marked).Clear();
        Length = Count = _marked = 0;
        HasNewEvents = HasNewMarks = false;
    }
}
