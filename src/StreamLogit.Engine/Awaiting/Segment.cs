using System.Numerics;
using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// A run of events in the order in which they were scored. Its bytes are only ever added to, and may be away in the archive; what became of the events
/// is marked beside them.
/// </summary>
internal sealed class Segment
{
    private SegmentMark[] _marks = []; // of those events that have one, in the order in which they got it
    private ushort[] _markOf = []; // for each event, one more than the place of its mark, or 0
    private int _marked;

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

    /// <summary>The marks made so far, as they are saved.</summary>
    public ReadOnlySpan<byte> MarkBytes => MemoryMarshal.AsBytes(_marks.AsSpan(0, _marked));

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

    public EventState StateOf(int ordinal) => PlaceOf(ordinal) is var place and >= 0 ? _marks[place].State : EventState.Awaiting;

    public void Mark(int ordinal, in LabelMark mark)
    {
        int place = PlaceOf(ordinal);
        if (place < 0)
        {
            place = _marked++;
            if (place == _marks.Length) Array.Resize(ref _marks, Math.Max(4, place + place / 2));
            SetPlace(ordinal, place);
        }
        _marks[place] = new SegmentMark(ordinal, mark);
        HasNewMarks = true;
    }

    /// <summary>Takes up marks that were saved.</summary>
    public void LoadMarks(ReadOnlySpan<byte> bytes)
    {
        _marks = MemoryMarshal.Cast<byte, SegmentMark>(bytes).ToArray();
        for (_marked = 0; _marked < _marks.Length; _marked++) SetPlace(_marks[_marked].Ordinal, _marked);
    }

    /// <summary>Empties it for new events.</summary>
    public void Clear()
    {
        _markOf.AsSpan().Clear();
        Length = Count = _marked = 0;
        HasNewEvents = HasNewMarks = false;
    }

    private int PlaceOf(int ordinal) => ordinal < _markOf.Length ? _markOf[ordinal] - 1 : -1;

    private void SetPlace(int ordinal, int place)
    {
        if (ordinal >= _markOf.Length) Array.Resize(ref _markOf, (int)BitOperations.RoundUpToPowerOf2((uint)Math.Max(Count, ordinal + 1)));
        _markOf[ordinal] = (ushort)(place + 1);
    }
}
