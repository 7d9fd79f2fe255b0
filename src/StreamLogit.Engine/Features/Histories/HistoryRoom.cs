using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features.Histories.Figures;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>All histories of a definition: a table for every set of key fields, and the overall rates.</summary>
internal sealed class HistoryRoom(RecordSchema schema, HashedSlots hashed)
{
    private const string Part = "histories";

    // How many records ahead memory is asked for: far enough for it to come, near enough for it to stay.
    private const int IndexAhead = 24;
    private const int RowAhead = 12;

    private readonly SortedDictionary<string, HistoryTable> _byFields = new(StringComparer.Ordinal);
    private readonly List<OverallRate> _overallRates = [];
    private readonly HistoryClock _clock = new();
    private HistoryTable[] _tables = [];
    private HistoryTable[] _labelledTables = [];
    private ulong[] _labelKeys = [];
    private HistoryMemory? _memory;

    /// <summary>The keys of the event opened last for which its label will be asked, to be kept with the event until then.</summary>
    public ReadOnlySpan<ulong> LabelKeys => _labelKeys;

    /// <summary>Makes a history. Only before <see cref="Start"/>.</summary>
    public HistoryEncoding Create(HistoryFeature options, int firstSlot)
    {
        var table = TableOf(options);
        var layout = table.Layout;
        long halfLife = options.HalfLifeMicroseconds;
        int field = options.Of is null ? -1 : schema.IndexOf(options.Of);
        if (options.Kind == HistoryKind.New) table.WithinMicroseconds = Math.Max(table.WithinMicroseconds, options.WithinMicroseconds);
        else table.IsForgettable = false;
        return options.Kind switch
        {
            HistoryKind.Count => new CountHistory(options, table, layout.With(new EventCount(halfLife)), firstSlot),
            HistoryKind.Sum => new SumHistory(options, table, layout.With(new ValueTotal(field, halfLife)), firstSlot),
            HistoryKind.Mean => new MeanHistory(options, table, layout.With(new ValueTotal(field, halfLife)), firstSlot),
            HistoryKind.Deviation => new DeviationHistory(options, table, layout.With(new ValueMoments(field, halfLife)), field, firstSlot),
            HistoryKind.Gap => new GapHistory(options, table, firstSlot),
            HistoryKind.Distinct => new DistinctHistory(options, table, layout.With(new DistinctValues(field, options.Values, halfLife)), firstSlot),
            HistoryKind.New => new NewHistory(options, table, _clock, firstSlot),
            HistoryKind.Rate => new RateHistory(options, table, layout.With(new KnownLabels(halfLife)), OverallOf(halfLife), firstSlot),
            _ => throw new ArgumentException($"no history of the kind {options.Kind}", nameof(options)),
        };
    }

    /// <summary>Makes the tables ready, when all histories are made.</summary>
    /// <param name="memoryBytes">The memory for their rows.</param>
    /// <param name="archive">Where rows go that memory has no room for, or null where there is to be room for all.</param>
    public void Start(long memoryBytes, IBlockArchive? archive)
    {
        _tables = [.. _byFields.Values];
        _memory = new HistoryMemory(memoryBytes, Math.Max(1, _tables.Length));
        for (int i = 0; i < _tables.Length; i++) _tables[i].Start(FormattableString.Invariant($"{Part}/{i}"), i, _memory, archive);
        _labelledTables = [.. _tables.Where(t => t.HasLabels)];
        _labelKeys = new ulong[_labelledTables.Length];
    }

    /// <summary>Makes the tables ready for an event: after it the histories can be read, and then <see cref="Add"/> tells them the event.</summary>
    public void Open(RecordBatch records, int record)
    {
        if (_tables.Length == 0) return;
        _clock.Advance(records.Records[record].TimeMicroseconds);
        foreach (var table in _tables)
        {
            table.WantIndex(records, record + IndexAhead);
            table.WantRow(records, record + RowAhead);
            table.Open(records, record, _clock.Microseconds);
        }
        for (int i = 0; i < _labelKeys.Length; i++) _labelKeys[i] = _labelledTables[i].Key;
    }

    public void Add(RecordBatch records, int record)
    {
        foreach (var table in _tables) table.Add(records, record);
    }

    /// <summary>Adds the label of an event that was opened before.</summary>
    /// <param name="labelKeys">Its <see cref="LabelKeys"/>.</param>
    /// <param name="timeMicroseconds">Its time.</param>
    /// <param name="label">0 or 1.</param>
    /// <param name="weight">Its importance; below 0 to take back a label that was wrong.</param>
    public void Learn(ReadOnlySpan<ulong> labelKeys, long timeMicroseconds, int label, double weight)
    {
        for (int i = 0; i < _labelledTables.Length; i++) _labelledTables[i].Learn(labelKeys[i], timeMicroseconds, label, weight);
        foreach (var overall in _overallRates) overall.Learn(timeMicroseconds, label, weight);
    }

    /// <summary>How full memory is and how often rows had to come back.</summary>
    public HistoryFigures Figures() => new(
        _tables.Sum(t => (long)t.Keys.Count),
        _memory?.UsedBytes ?? 0,
        _tables.Sum(t => t.Keys.Lookups),
        _tables.Sum(t => t.Keys.Misses),
        _tables.Sum(t => t.Keys.Evictions));

    public void Save(StateBlocks changes)
    {
        if (_tables.Length == 0) return;
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(_clock.Microseconds);
        foreach (var overall in _overallRates) overall.Save(writer);
        changes.Put(Part, 0, bytes.ToArray());
        foreach (var table in _tables) table.Keys.Save(changes);
    }

    public void Load(StateBlocks state)
    {
        if (_tables.Length == 0) return;
        byte[] bytes = state.Find(Part, 0) ?? throw new InvalidStateException($"the state has no {Part}");
        using var reader = new BinaryReader(new MemoryStream(bytes));
        _clock.Advance(reader.ReadInt64());
        foreach (var overall in _overallRates) overall.Load(reader);
        foreach (var table in _tables) table.Keys.Load(state);
    }

    // Of the kind new, the value is a part of the key.
    private HistoryTable TableOf(HistoryFeature options)
    {
        IEnumerable<string> paths = options.Kind == HistoryKind.New ? options.Per.Append(options.Of!) : options.Per;
        string[] fields = [.. paths.Distinct().Order(StringComparer.Ordinal)];
        string name = string.Join(" & ", fields);
        if (!_byFields.TryGetValue(name, out var table))
            _byFields[name] = table = new HistoryTable([.. fields.Select(schema.IndexOf)], hashed.SeedOf("per " + name));
        return table;
    }

    private OverallRate OverallOf(long halfLifeMicroseconds)
    {
        var known = _overallRates.Find(o => o.HalfLifeMicroseconds == halfLifeMicroseconds);
        if (known is null) _overallRates.Add(known = new OverallRate(halfLifeMicroseconds));
        return known;
    }
}
