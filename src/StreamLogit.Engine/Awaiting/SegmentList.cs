namespace StreamLogit.Engine.Awaiting;

/// <summary>The segments by their numbers, which go on without gaps; new ones come at the end, and the oldest leave.</summary>
internal sealed class SegmentList
{
    private readonly List<Segment?> _segments = [];
    private int _start; // the number of _segments[0]

    /// <summary>The number of the oldest one, or of the next where there is none.</summary>
    public int First { get; private set; }

    /// <summary>The number that the next new one gets.</summary>
    public int Next => _start + _segments.Count;

    public int Count => Next - First;

    public Segment Last => this[Next - 1];

    public Segment this[int number] => _segments[number - _start]!;

    /// <summary>Sets the number of the first one. Only while there is none.</summary>
    public void StartAt(int number) => First = _start = number;

    public void Add(Segment segment) => _segments.Add(segment);

    public Segment RemoveFirst()
    {
        var first = this[First];
        _segments[First - _start] = null;
        First++;

        // Not each time: what is behind has to move.
        if (First - _start > Count + 16)
        {
            _segments.RemoveRange(0, First - _start);
            _start = First;
        }
        return first;
    }
}
