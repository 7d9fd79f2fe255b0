using StreamLogit.Engine.Health;

namespace StreamLogit.Engine.Awaiting;

/// <summary>A mark with the event that it is of, laid out so that it takes 24 bytes: there is one for every label of the wait.</summary>
internal readonly struct SegmentMark(int ordinal, in LabelMark mark)
{
    private readonly double _baseRate = mark.Count.BaseRate;
    private readonly int _minute = mark.Count.Minute;
    private readonly uint _sequence = mark.Count.Sequence;
    private readonly float _weight = mark.Count.Weight;
    private readonly ushort _ordinal = (ushort)ordinal;
    private readonly EventState _state = mark.State;

    /// <summary>The place of the event in its segment, of which an event of at least 80 bytes leaves room for a few hundred.</summary>
    public int Ordinal => _ordinal;

    public LabelMark ToMark() => new(_state, new LabelCount(_minute, _sequence, _baseRate, _weight));
}
