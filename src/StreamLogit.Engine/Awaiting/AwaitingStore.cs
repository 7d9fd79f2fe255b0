using System.Collections.Immutable;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// The scored events that can still be taught a label: each with its vector and its log-odds as they were at scoring, from its scoring until its wait is over
/// (and as long again where it was then learned as a 0). They lie in segments in the order in which they were scored, which is the order in which their
/// waits end. The newest segments are in memory; older ones, beyond the memory given, in the archive.
/// </summary>
internal sealed class AwaitingStore
{
    /// <summary>The part of the state that the engine reads from the archive, block by block, instead of loading it.</summary>
    public const string SegmentsPart = "awaiting/segments";

    private const string CursorsPart = "awaiting/cursors";
    private const int MaximumSpares = 64;
    private const int UsualEventBytes = 256;

    private readonly int _settings;
    private readonly ScoringBanks _banks;
    private readonly int _labelKeys;
    private readonly long _waitMicroseconds;
    private readonly long _keepMicroseconds;
    private readonly int _hotSegments;
    private readonly IBlockArchive? _archive;
    private readonly EventIndex _index = new();
    private readonly SegmentReader _reader;
    private readonly Stack<byte[]> _spareBytes = [];
    private readonly Stack<Segment> _spareSegments = [];
    private readonly SegmentList _segments = new(); // the last one takes new events
    private readonly MarkJournal _journal = new();
    private readonly List<int> _newlyMarked = []; // numbers of segments with marks that are not saved
    private int _firstHot; // the number of the first segment that is in memory
    private int _savedFirst; // segments before this one are removed from the state
    private int _savedNext; // segments before this one are in the state or the archive
    private EventPlace _waitCursor; // the first event whose wait may not be over
    private EventPlace _keepCursor; // the first event that is still kept
    private long _nextEnd = long.MaxValue; // no wait ends and no event is let go before this time of the clock

    /// <param name="settings">The names of the bank's settings.</param>
    /// <param name="waitMicroseconds">How long an event waits for its label.</param>
    /// <param name="keepsAssumed">Whether events are kept as long again when their wait is over.</param>
    /// <param name="memoryBytes">Bytes of segments in memory, beyond which they go to the archive.</param>
    /// <param name="archive">The archive, or null where all stays in memory.</param>
    /// <param name="labelKeys">How many keys are kept with every event for the histories that learn its label.</param>
    public AwaitingStore(
        ImmutableArray<string> settings, long waitMicroseconds, bool keepsAssumed, long memoryBytes, IBlockArchive? archive, int labelKeys = 0)
    {
        _settings = settings.Length;
        _labelKeys = labelKeys;
        _banks = new ScoringBanks(settings);
        _waitMicroseconds = waitMicroseconds;
        _keepMicroseconds = keepsAssumed ? 2 * waitMicroseconds : waitMicroseconds;
        _hotSegments = (int)Math.Clamp(memoryBytes / Segment.UsualBytes, 2, int.MaxValue);
        _archive = archive;
        _reader = new SegmentReader(archive, SegmentsPart);
    }

    /// <summary>Events whose label has not come and whose wait is not over.</summary>
    public long Awaiting { get; private set; }

    /// <summary>Events that are kept, those with a label included.</summary>
    public long Kept => _index.Count;

    /// <summary>Bytes of memory that the kept events and their index take.</summary>
    public long MemoryBytes =>
        _index.Bytes + (long)(_segments.Next - _firstHot) * Segment.UsualBytes + _reader.Bytes;

    /// <summary>Asks for the memory in which an id is looked up; some records later <see cref="WantEvent"/> asks for that of its event.</summary>
    public void WantIndex(ulong idHash) => _index.ShardOf(idHash).Want(idHash);

    /// <summary>Asks for the memory of the kept event with an id; some records later <see cref="WantMark"/> asks for that of its mark.</summary>
    public void WantEvent(ulong idHash)
    {
        if (TryFindFirst(idHash, out var place) && _segments[place.Segment].Bytes is { } bytes) CacheHint.Want(bytes, place.Offset, UsualEventBytes);
    }

    /// <summary>Asks for the memory of what is marked of the kept event with an id.</summary>
    public void WantMark(ulong idHash)
    {
        if (TryFindFirst(idHash, out var place) && _segments[place.Segment].Bytes is not null) _segments[place.Segment].WantMark(HeaderAt(place).Ordinal);
    }

    /// <summary>Where the kept event with an id lies.</summary>
    public bool TryFind(ReadOnlySpan<byte> id, ulong idHash, out EventPlace place)
    {
        var shard = _index.ShardOf(idHash);
        for (int cursor = shard.First(idHash); cursor >= 0; cursor = shard.Next(idHash, cursor))
        {
            place = shard.PlaceAt(cursor, _segments.First);
            if (At(place).Id.SequenceEqual(id)) return true;
        }
        place = default;
        return false;
    }

    /// <summary>The event that lies there, readable until the next call that may read another one.</summary>
    public KeptEvent At(EventPlace place)
    {
        var segment = _segments[place.Segment];
        byte[] bytes = segment.Bytes ?? _reader.Read(place.Segment);
        return new KeptEvent(bytes.AsSpan(place.Offset, segment.Length - place.Offset), _banks.SettingsOf(place.Segment), _labelKeys);
    }

    /// <summary>The log-odds that every setting of the bank gave an event when it was scored; see <see cref="ScoringBanks"/>. Readable as long as the event.</summary>
    public ReadOnlySpan<double> LogOddsOf(EventPlace place) => _banks.LogOddsOf(At(place), place.Segment);

    /// <summary>What became of the event that lies there.</summary>
    public LabelMark MarkOf(EventPlace place) => _segments[place.Segment].MarkOf(HeaderAt(place).Ordinal);

    /// <summary>Whether an event that was added there is still kept.</summary>
    public bool Holds(EventPlace place) => !IsPassed(place);

    /// <summary>Says what became of an event.</summary>
    public void Mark(EventPlace place, in LabelMark mark)
    {
        var segment = _segments[place.Segment];
        int ordinal = HeaderAt(place).Ordinal;
        if (!segment.IsMarked(ordinal)) Awaiting--;
        if (!segment.HasNewMarks) NoteNewMarks(place.Segment);
        segment.Mark(ordinal, mark);
    }

    /// <summary>Adds an event that was scored just now and whose id is not kept. The lengths in the header are filled in here.</summary>
    public EventPlace Add(
        KeptHeader header, ReadOnlySpan<double> logOdds, in EncodedVector vector, ReadOnlySpan<byte> id, ReadOnlySpan<ulong> labelKeys = default)
    {
        header.Entries = vector.Slots.Length;
        header.IdLength = id.Length;
        header.TotalBytes = KeptEvent.SizeOf(_settings, _labelKeys, header.Entries, id.Length);
        var segment = SegmentFor(header.TotalBytes);
        header.Ordinal = segment.Count;
        int offset = segment.Append(header.TotalBytes);
        KeptEvent.Write(segment.Bytes.AsSpan(offset, header.TotalBytes), header, logOdds, labelKeys, vector, id);
        var place = new EventPlace(_segments.Next - 1, offset);
        _index.Add(header.IdHash, place);
        Awaiting++;
        _nextEnd = Math.Min(_nextEnd, header.ScoredAtMicroseconds + _waitMicroseconds);
        return place;
    }

    /// <summary>Whether, at a time of the stream's clock, some wait may be over or some event may not be kept any longer.</summary>
    public bool IsDue(long clockMicroseconds) => clockMicroseconds > _nextEnd;

    /// <summary>
    /// The next event whose wait is over at a time of the stream's clock and whose label has not come, where such events are kept. Whoever asks must mark
    /// it before asking again.
    /// </summary>
    public bool TryTakeExpired(long clockMicroseconds, out EventPlace place)
    {
        while (TrySkipEnds(ref _waitCursor) && HeaderAt(_waitCursor).ScoredAtMicroseconds < clockMicroseconds - _waitMicroseconds)
        {
            place = _waitCursor;
            Pass(ref _waitCursor);
            if (!_segments[place.Segment].IsMarked(HeaderAt(place).Ordinal)) return true;
        }
        place = default;
        return false;
    }

    /// <summary>Lets go of the events that are not kept any longer. Comes after all expired ones were taken.</summary>
    /// <returns>How many of them never had a label.</returns>
    public int Forget(long clockMicroseconds)
    {
        int unlabelled = 0;
        long scoredBefore = clockMicroseconds - _keepMicroseconds;
        _nextEnd = long.MaxValue;
        while (TrySkipEnds(ref _keepCursor))
        {
            ref readonly var header = ref HeaderAt(_keepCursor);
            if (header.ScoredAtMicroseconds >= scoredBefore)
            {
                _nextEnd = header.ScoredAtMicroseconds + _keepMicroseconds;
                WantToForget(header);
                break;
            }
            if (!_segments[_keepCursor.Segment].IsMarked(header.Ordinal)) unlabelled++;
            _index.Remove(header.IdHash, _keepCursor, _segments.First);
            Pass(ref _keepCursor);
        }
        Awaiting -= unlabelled;
        while (_segments.First < _keepCursor.Segment) DropOldestSegment();
        if (_keepMicroseconds == _waitMicroseconds) _waitCursor = _keepCursor;
        else if (TrySkipEnds(ref _waitCursor)) _nextEnd = Math.Min(_nextEnd, HeaderAt(_waitCursor).ScoredAtMicroseconds + _waitMicroseconds);
        return unlabelled;
    }

    public void Save(StateBlocks changes)
    {
        for (; _savedFirst < _segments.First; _savedFirst++) changes.Remove(SegmentsPart, _savedFirst);
        for (int number = Math.Max(_savedNext - 1, _segments.First); number < _segments.Next; number++)
        {
            var segment = _segments[number];
            if (segment.HasNewEvents) changes.Put(SegmentsPart, number, segment.Bytes.AsSpan(0, segment.Length));
            segment.HasNewEvents = false;
        }
        _savedNext = _segments.Next;
        foreach (int number in _newlyMarked)
            if (number >= _segments.First) _journal.Add(changes, number, _segments[number].TakeNewMarks());
        _newlyMarked.Clear();
        _journal.Save(changes, _segments.First);
        ReadOnlySpan<int> cursors = [_segments.First, _waitCursor.Segment, _waitCursor.Offset, _keepCursor.Segment, _keepCursor.Offset];
        changes.Put(CursorsPart, 0, MemoryMarshal.AsBytes(cursors));
        _banks.Save(changes, _segments.First);
    }

    public void Load(StateBlocks state)
    {
        var cursors = MemoryMarshal.Cast<byte, int>(state.Find(CursorsPart, 0) ?? throw new InvalidStateException($"the state has no {CursorsPart}"));
        _savedFirst = _firstHot = cursors[0];
        _segments.StartAt(cursors[0]);
        _waitCursor = new EventPlace(cursors[1], cursors[2]);
        _keepCursor = new EventPlace(cursors[3], cursors[4]);
        _nextEnd = long.MinValue;
        if (_archive is null)
            foreach (var (number, bytes) in state.Read(SegmentsPart)) LoadSegment(number, bytes, bytes.Length);
        else
            foreach (long number in _archive.Numbers(SegmentsPart))
            {
                byte[] bytes = new byte[Segment.UsualBytes];
                int length = _archive.Read(SegmentsPart, number, ref bytes);
                LoadSegment(number, bytes, length);
            }
        _savedNext = _segments.Next;
        foreach (var (number, mark) in _journal.Load(state, _segments.First))
        {
            if (number >= _segments.Next) throw new InvalidStateException($"{MarkJournal.Part} speaks of segment {number}, which is not there");
            if (_segments[number].LoadMark(mark)) Awaiting--;
        }
        _banks.Load(state, _segments.Next);
    }

    private void LoadSegment(long number, byte[] bytes, int length)
    {
        if (number != _segments.Next) throw new InvalidStateException($"block {number} of {SegmentsPart} is out of order");
        var segment = new Segment();
        while (segment.Length < length)
        {
            var header = MemoryMarshal.Read<KeptHeader>(bytes.AsSpan(segment.Length));
            var place = new EventPlace((int)number, segment.Append(header.TotalBytes));
            if (place.Offset >= Segment.UsualBytes) throw new InvalidStateException($"block {number} of {SegmentsPart} is too long");
            if (IsPassed(place))
            {
                segment.Passed = segment.Count;
                continue;
            }
            Awaiting++;
            _index.Add(header.IdHash, place);
        }
        segment.HasNewEvents = false;
        if (bytes.Length < Segment.UsualBytes) Array.Resize(ref bytes, Segment.UsualBytes); // the last one takes new events
        segment.Bytes = bytes;
        _segments.Add(segment);
        ArchiveBeyondMemory();
    }

    private ref readonly KeptHeader HeaderAt(EventPlace place) =>
        ref MemoryMarshal.AsRef<KeptHeader>((_segments[place.Segment].Bytes ?? _reader.Read(place.Segment)).AsSpan(place.Offset));

    private bool TryFindFirst(ulong idHash, out EventPlace place)
    {
        var shard = _index.ShardOf(idHash);
        int cursor = shard.First(idHash);
        place = cursor < 0 ? default : shard.PlaceAt(cursor, _segments.First);
        return cursor >= 0;
    }

    /// <summary>Moves a place that is at the end of a segment to the next event; false where there is none.</summary>
    private bool TrySkipEnds(ref EventPlace place)
    {
        int last = _segments.Next - 1;
        while (place.Segment < last && place.Offset >= _segments[place.Segment].Length) place = new EventPlace(place.Segment + 1, 0);
        return place.Segment <= last && place.Offset < _segments[place.Segment].Length;
    }

    private bool IsPassed(EventPlace place) =>
        place.Segment < _keepCursor.Segment || (place.Segment == _keepCursor.Segment && place.Offset < _keepCursor.Offset);

    /// <summary>Moves a cursor over the event that it is at.</summary>
    private void Pass(ref EventPlace cursor) => cursor = cursor with { Offset = cursor.Offset + HeaderAt(cursor).TotalBytes };

    /// <summary>Asks for the memory that is needed when the event at the cursor is let go.</summary>
    private void WantToForget(in KeptHeader header)
    {
        WantIndex(header.IdHash);
        if (_segments[_keepCursor.Segment].Bytes is { } bytes) CacheHint.Want(bytes, _keepCursor.Offset + header.TotalBytes, KeptHeader.Size);
    }

    private void NoteNewMarks(int segment)
    {
        // Where nothing is ever saved, the segments that are gone leave again.
        if (_newlyMarked.Count > 2 * _segments.Count + 16)
        {
            int kept = 0;
            foreach (int number in CollectionsMarshal.AsSpan(_newlyMarked))
                if (number >= _segments.First) _newlyMarked[kept++] = number;
            _newlyMarked.RemoveRange(kept, _newlyMarked.Count - kept);
        }
        _newlyMarked.Add(segment);
    }

    private Segment SegmentFor(int size)
    {
        bool isOfPresent = _segments.Next > _banks.FirstOfPresent;
        if (_segments.Count > 0 && isOfPresent && _segments.Last.HasRoom(size)) return _segments.Last;
        if (_segments.Count == IndexShard.SegmentNumbers)
            throw new InvalidOperationException("more events are kept than there is room for: shorten labels.wait or thin them by labels.keep");
        if (!_spareSegments.TryPop(out var segment)) segment = new Segment();
        segment.Bytes = size <= Segment.UsualBytes && _spareBytes.TryPop(out byte[]? spare) ? spare : new byte[Math.Max(size, Segment.UsualBytes)];
        _segments.Add(segment);
        ArchiveBeyondMemory();
        return segment;
    }

    private void ArchiveBeyondMemory()
    {
        if (_archive is null) return;
        while (_segments.Next - _firstHot > _hotSegments)
        {
            var segment = _segments[_firstHot];
            if (segment.HasNewEvents) _archive.Write(SegmentsPart, _firstHot, segment.Bytes.AsSpan(0, segment.Length));
            segment.HasNewEvents = false;
            Release(segment);
            _firstHot++;
        }
    }

    private void DropOldestSegment()
    {
        if (_archive is not null && _segments.First < _firstHot) _archive.Remove(SegmentsPart, _segments.First);
        var segment = _segments.RemoveFirst();
        Release(segment);
        segment.Clear();
        if (_spareSegments.Count < MaximumSpares) _spareSegments.Push(segment);
        _firstHot = Math.Max(_firstHot, _segments.First);
    }

    private void Release(Segment segment)
    {
        if (segment.Bytes is { Length: Segment.UsualBytes } bytes && _spareBytes.Count < MaximumSpares) _spareBytes.Push(bytes);
        segment.Bytes = null;
    }
}
