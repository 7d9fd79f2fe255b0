using System.Collections.Immutable;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>
/// All that is remembered of the keys that some fields give. For every event it is opened first, read by the histories, and then told the event, so that
/// every history sees the past before the event.
/// </summary>
/// <remarks>
/// A row has one clock, the time of the newest event of its key. An event that is older than it is added as much decayed as it would be by
/// now, and the clock stays. Sums are those of all events so far, whatever their order.
/// </remarks>
internal sealed class HistoryTable(ImmutableArray<int> fields, ulong seed)
{
    private KeyTable? _keys;
    private Accumulator[] _accumulators = [];
    private double[] _weights = []; // of the event at hand, by half-life
    private (long HalfLifeMicroseconds, int First, int Count)[] _decayed = [];
    private int _row;

    public RowLayout Layout { get; } = new();

    /// <summary>How long a row can matter where it says no more than when its key was seen.</summary>
    public long WithinMicroseconds { get; set; }

    /// <summary>Whether rows say no more than that.</summary>
    public bool IsForgettable { get; set; } = true;

    /// <summary>Whether it wants labels.</summary>
    public bool HasLabels => _accumulators.Any(a => a is KnownLabels);

    /// <summary>The key of the event, or 0 where a field of it is missing.</summary>
    public ulong Key { get; private set; }

    /// <summary>Whether the key has been seen before.</summary>
    public bool IsKnown { get; private set; }

    /// <summary>The time of the key's newest event before this one; meaningless where it was never seen.</summary>
    public long PreviousClockMicroseconds { get; private set; }

    /// <summary>The key's row as of the event. Not without a key.</summary>
    public Span<double> Row => Keys[_row];

    public KeyTable Keys => _keys ?? throw new InvalidOperationException("the table has not been started");

    /// <summary>Called once when the layout has everything.</summary>
    public void Start(string part, int table, HistoryMemory memory, IBlockArchive? archive)
    {
        Layout.Arrange();
        _accumulators = [.. Layout.Accumulators];
        _decayed = [.. Layout.DecayedWords];
        _weights = new double[_decayed.Length];
        _keys = new KeyTable(Layout.Words, part, table, memory, archive);
    }

    /// <summary>Finds the row of the event's key and lets the time pass for it since its clock.</summary>
    public void Open(RecordBatch records, int record, long streamClockMicroseconds)
    {
        Key = KeyOf(records, record);
        IsKnown = false;
        if (Key == 0) return;
        if (IsForgettable) Keys.ForgettableMicroseconds = streamClockMicroseconds - WithinMicroseconds;
        _row = Keys.FindOrAdd(Key, out bool isNew);
        IsKnown = !isNew;
        var row = Keys[_row];
        ref long clock = ref RowPool.ClockOf(row);
        long time = records.Records[record].TimeMicroseconds;
        if (isNew) clock = time;
        PreviousClockMicroseconds = clock;
        if (time < clock) WeighLate((double)clock - time);
        else Advance(row, ref clock, time);
        Keys.MarkChanged(_row);
    }

    /// <summary>Adds the event for which the table is open.</summary>
    public void Add(RecordBatch records, int record)
    {
        if (Key == 0) return;
        var row = Keys[_row];
        foreach (var accumulator in _accumulators)
            accumulator.Add(row, records, record, _weights[accumulator.HalfLifeIndex]);
    }

    /// <summary>Adds the label of an earlier event of a key.</summary>
    public void Learn(ulong key, long timeMicroseconds, int label, double weight)
    {
        if (key == 0) return;
        int found = Keys.FindOrAdd(key, out bool isNew);
        if (isNew) throw new InvalidStateException($"a key whose event is awaiting its label has no row");
        var row = Keys[found];
        double age = (double)RowPool.ClockOf(row) - timeMicroseconds;
        foreach (var accumulator in _accumulators)
            if (accumulator is KnownLabels labels) labels.Learn(row, label, weight * Decay.Over(age, labels.HalfLifeMicroseconds));
        Keys.MarkChanged(found);
    }

    /// <summary>Asks for the memory in which the key of a coming event is looked up; some records later <see cref="WantRow"/> asks for its row.</summary>
    public void WantIndex(RecordBatch records, int record)
    {
        if (IsEvent(records, record) && KeyOf(records, record) is var key and not 0) Keys.WantIndex(key);
    }

    /// <summary>Asks for the memory of the row of a coming event's key.</summary>
    public void WantRow(RecordBatch records, int record)
    {
        if (IsEvent(records, record) && KeyOf(records, record) is var key and not 0) Keys.WantRow(key);
    }

    private static bool IsEvent(RecordBatch records, int record) =>
        record < records.Count && records.Records[record].Kind is RecordKind.Event or RecordKind.LabelledEvent;

    private ulong KeyOf(RecordBatch records, int record)
    {
        ulong hash = seed;
        var values = records.Fields(record);
        foreach (int field in fields)
        {
            ref var value = ref values[field];
            if (!value.IsPresent) return 0;
            hash = HashedSlots.Combine(hash, value.Hash);
        }
        return Math.Max(hash, 1);
    }

    private void Advance(Span<double> row, ref long clock, long time)
    {
        Array.Fill(_weights, 1);
        if (time == clock) return;
        double passed = (double)time - clock;
        clock = time;
        foreach (var (halfLife, first, count) in _decayed)
        {
            double decay = Decay.Over(passed, halfLife);
            foreach (ref double word in row.Slice(first, count)) word *= decay;
        }
        foreach (var accumulator in _accumulators) accumulator.Advance(row, passed / accumulator.HalfLifeMicroseconds);
    }

    private void WeighLate(double age)
    {
        for (int i = 0; i < _weights.Length; i++) _weights[i] = Decay.Over(age, _decayed[i].HalfLifeMicroseconds);
    }
}
