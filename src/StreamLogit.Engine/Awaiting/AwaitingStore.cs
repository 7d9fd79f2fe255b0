using System.Runtime.InteropServices;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// The events that were scored and whose label is not known yet, each with its vector and its log-odds as they were at scoring, until the label
/// comes or the wait is over. They lie in segments in the order in which they were scored, which is the order in which their waits end.
/// </summary>
internal sealed class AwaitingStore(int settings, long waitMicroseconds)
{
    private const string SegmentsPart = "awaiting/segments";
    private const string TakenPart = "awaiting/taken";
    private const string BoundsPart = "awaiting/bounds";
    private const int SegmentBytes = 1 << 16;
    private const int MaximumSpares = 16;

    private readonly EventIndex _index = new();
    private readonly Queue<AwaitingSegment> _spares = [];
    private readonly List<AwaitingSegment> _segments = []; // oldest first; the last one takes new events
    private int _firstSegment; // the number of _segments[0]
    private int _savedFirstSegment;
    private int _oldestOffset; // where in _segments[0] the oldest event lies that has not been passed yet

    public int Count => _index.Count;

    /// <summary>Where the awaiting event with an id lies.</summary>
    public bool TryFind(ReadOnlySpan<byte> id, ulong idHash, out EventPlace place)
    {
        for (int cursor = _index.First(idHash); cursor >= 0; cursor = _index.Next(idHash, cursor))
        {
            place = _index.PlaceAt(cursor);
            if (At(place).Id.SequenceEqual(id)) return true;
        }
        place = default;
        return false;
    }

    /// <summary>The event that lies there.</summary>
    public AwaitingEvent At(EventPlace place)
    {
        var segment = _segments[place.Segment - _firstSegment];
        return new AwaitingEvent(segment.Bytes.AsSpan(place.Offset, segment.Length - place.Offset), settings);
    }

    /// <summary>Adds an event that was scored just now and whose id is not awaiting. The lengths in the header are filled in here.</summary>
    public void Add(AwaitingHeader header, ReadOnlySpan<double> logOdds, in EncodedVector vector, ReadOnlySpan<byte> id)
    {
        header.Entries = vector.Slots.Length;
        header.IdLength = id.Length;
        header.TotalBytes = AwaitingEvent.SizeOf(settings, header.Entries, id.Length);
        var segment = SegmentFor(header.TotalBytes);
        header.Ordinal = segment.Count;
        int offset = segment.Append(header.TotalBytes);
        AwaitingEvent.Write(segment.Bytes.AsSpan(offset, header.TotalBytes), header, logOdds, vector, id);
        _index.Add(header.IdHash, new EventPlace(_firstSegment + _segments.Count - 1, offset));
    }

    /// <summary>Takes an event out. Views of it stay readable until the next <see cref="Add"/>.</summary>
    public void Remove(EventPlace place)
    {
        ref readonly var header = ref At(place).Header;
        int cursor = _index.First(header.IdHash);
        while (_index.PlaceAt(cursor) != place) cursor = _index.Next(header.IdHash, cursor);
        _index.RemoveAt(cursor);
        _segments[place.Segment - _firstSegment].Take(header.Ordinal);
    }

    /// <summary>The oldest event whose wait is over at a time of the stream's clock. It stays until it is removed.</summary>
    public bool TryFindExpired(long clockMicroseconds, out EventPlace place)
    {
        while (_segments.Count > 0)
        {
            var segment = _segments[0];
            while (_oldestOffset < segment.Length)
            {
                place = new EventPlace(_firstSegment, _oldestOffset);
                ref readonly var header = ref At(place).Header;
                if (!segment.IsTaken[header.Ordinal])
                    return clockMicroseconds - header.ScoredAtMicroseconds > waitMicroseconds;
                _oldestOffset += header.TotalBytes;
            }
            if (_segments.Count == 1) break; // it still takes new events
            DropOldestSegment();
        }
        place = default;
        return false;
    }

    public void Save(StateBlocks changes)
    {
        for (; _savedFirstSegment < _firstSegment; _savedFirstSegment++)
        {
            changes.Remove(SegmentsPart, _savedFirstSegment);
            changes.Remove(TakenPart, _savedFirstSegment);
        }
        for (int i = 0; i < _segments.Count; i++)
        {
            var segment = _segments[i];
            if (segment.HasNewEvents) changes.Put(SegmentsPart, _firstSegment + i, segment.Bytes.AsSpan(0, segment.Length));
            if (segment.HasNewlyTaken) changes.Put(TakenPart, _firstSegment + i, MemoryMarshal.AsBytes(segment.IsTaken));
            segment.HasNewEvents = segment.HasNewlyTaken = false;
        }
        ReadOnlySpan<int> bounds = [_firstSegment, _oldestOffset];
        changes.Put(BoundsPart, 0, MemoryMarshal.AsBytes(bounds));
    }

    public void Load(StateBlocks state)
    {
        byte[] bounds = state.Find(BoundsPart, 0) ?? throw new InvalidStateException($"the state has no {BoundsPart}");
        _firstSegment = _savedFirstSegment = MemoryMarshal.Cast<byte, int>(bounds)[0];
        _oldestOffset = MemoryMarshal.Cast<byte, int>(bounds)[1];
        foreach (var (number, bytes) in state.Read(SegmentsPart))
        {
            if (number != _firstSegment + _segments.Count) throw new InvalidStateException($"block {number} of {SegmentsPart} is out of order");
            _segments.Add(LoadSegment((int)number, bytes, state.Find(TakenPart, number) ?? []));
        }
    }

    private AwaitingSegment LoadSegment(int number, byte[] bytes, ReadOnlySpan<byte> taken)
    {
        var buffer = new byte[Math.Max(SegmentBytes, bytes.Length)];
        bytes.CopyTo(buffer, 0);
        var segment = new AwaitingSegment(buffer);
        while (segment.Length < bytes.Length)
        {
            int offset = segment.Length;
            var header = MemoryMarshal.Read<AwaitingHeader>(bytes.AsSpan(offset));
            segment.Append(header.TotalBytes);
            // Events that were added after the last one was taken have no mark yet.
            if (header.Ordinal < taken.Length && taken[header.Ordinal] != 0) segment.Take(header.Ordinal);
            else _index.Add(header.IdHash, new EventPlace(number, offset));
        }
        segment.HasNewEvents = segment.HasNewlyTaken = false;
        return segment;
    }

    private AwaitingSegment SegmentFor(int size)
    {
        if (_segments.Count > 0 && _segments[^1].HasRoom(size)) return _segments[^1];
        var segment = size <= SegmentBytes && _spares.TryDequeue(out var spare)
            ? spare
            : new AwaitingSegment(new byte[Math.Max(size, SegmentBytes)]);
        _segments.Add(segment);
        return segment;
    }

    private void DropOldestSegment()
    {
        var segment = _segments[0];
        _segments.RemoveAt(0);
        _firstSegment++;
        _oldestOffset = 0;
        if (segment.Bytes.Length > SegmentBytes || _spares.Count >= MaximumSpares) return;
        segment.Clear();
        _spares.Enqueue(segment);
    }
}
