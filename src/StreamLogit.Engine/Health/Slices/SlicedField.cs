using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Health.Slices;

/// <summary>
/// A field by whose values health is told apart: its most frequent values have a series each, the rest have one together. A value takes a free place as soon as it is
/// one of two hundred events; once a day a value that has become twice as frequent as the rarest one with a place takes that place, and its series starts anew.
/// </summary>
/// <remarks>
/// An event remembers its series by a code of 16 bits: 0 for the rest, else place + 1 in the low 6 bits and the place's generation in the others, so that a label that comes
/// after its place was given away counts among the rest.
/// </remarks>
internal sealed class SlicedField
{
    /// <summary>The most values of a field that have a series each.</summary>
    public const int MaximumValues = 62;

    private const int PlaceBits = 6;
    private const int GenerationMask = (1 << (16 - PlaceBits)) - 1;
    private const int EventsPerLook = 256;
    private const int LeastEvents = 16;
    private const int RarestShare = 200;

    private readonly string _part;
    private readonly int _field;
    private readonly int _places;
    private readonly RollUpRetention[] _levels;
    private readonly List<SliceSeries> _series = [];
    private readonly SliceCandidates _candidates = new();
    private readonly List<RollUp> _discarded = [];
    private long _minute;
    private long _recentEvents;

    /// <param name="path">The path of the field.</param>
    /// <param name="field">Its place in the schema.</param>
    /// <param name="places">How many values have a series each.</param>
    /// <param name="levels">What the series keep.</param>
    public SlicedField(string path, int field, int places, RollUpRetention[] levels)
    {
        Path = path;
        _part = "health/slices/" + path;
        _field = field;
        _places = places;
        _levels = levels;
        Rest = new SliceSeries(CreateRollUp("rest"));
    }

    public string Path { get; }

    /// <summary>The series of the values that have one of their own.</summary>
    public IReadOnlyList<SliceSeries> Series => _series;

    /// <summary>The series of all other values.</summary>
    public SliceSeries Rest { get; }

    /// <summary>Counts an event and gives the code of its value.</summary>
    public ushort CodeOf(RecordBatch records, int record)
    {
        ref readonly var value = ref records.Fields(record)[_field];
        ulong hash = value.IsPresent ? value.Hash : Features.HashedSlots.MissingValue;
        if (++_recentEvents % EventsPerLook == 0) FillPlaces();
        for (int place = 0; place < _series.Count; place++)
        {
            if (_series[place].Hash != hash) continue;
            _series[place].RecentEvents++;
            return (ushort)((place + 1) | (_series[place].Generation & GenerationMask) << PlaceBits);
        }
        _candidates.Count(hash, value.IsPresent ? records.Bytes.Slice(value.TextStart, value.TextLength) : "(missing)"u8);
        return 0;
    }

    /// <summary>The series that a code stands for.</summary>
    public SliceSeries At(ushort code)
    {
        int place = (code & ((1 << PlaceBits) - 1)) - 1;
        if (place < 0 || place >= _series.Count) return Rest;
        return (_series[place].Generation & GenerationMask) == code >> PlaceBits ? _series[place] : Rest;
    }

    /// <summary>Opens the buckets of a minute; on a new day, rarer values may lose their places.</summary>
    public void MoveTo(long minute, bool isNewDay)
    {
        _minute = minute;
        Rest.RollUp.MoveTo(minute);
        foreach (var series in _series) series.RollUp.MoveTo(minute);
        if (!isNewDay) return;
        FillPlaces();
        ReplaceRarest();
        _candidates.Halve();
        _recentEvents /= 2;
        foreach (var series in _series) series.RecentEvents /= 2;
    }

    public void Save(StateBlocks changes)
    {
        foreach (var rollUp in _discarded) rollUp.RemoveFrom(changes);
        _discarded.Clear();
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(_minute);
        writer.Write(_recentEvents);
        writer.Write(_series.Count);
        foreach (var series in _series) series.Save(writer);
        _candidates.Save(writer);
        changes.Put(_part, 0, bytes.ToArray());
        Rest.RollUp.Save(changes);
        foreach (var series in _series) series.RollUp.Save(changes);
    }

    public void Load(StateBlocks state)
    {
        if (state.Find(_part, 0) is not { } bytes) return; // the field was not sliced before
        using var reader = new BinaryReader(new MemoryStream(bytes));
        _minute = reader.ReadInt64();
        _recentEvents = reader.ReadInt64();
        int count = reader.ReadInt32();
        for (int place = 0; place < count; place++)
        {
            // Places that the definition no longer grants are read and left behind.
            var series = new SliceSeries(CreateRollUp(PlaceName(place)));
            series.Load(reader);
            series.RollUp.Load(state);
            if (place < _places) _series.Add(series);
            else _discarded.Add(series.RollUp);
        }
        _candidates.Load(reader);
        Rest.RollUp.Load(state);
    }

    private void FillPlaces()
    {
        while (_series.Count < _places)
        {
            ref var best = ref _candidates.Best();
            if (best.Count < LeastEvents || best.Count * RarestShare < _recentEvents) return;
            _series.Add(CreateSeries(_series.Count, best, generation: 0));
            best.Count = 0;
        }
    }

    private void ReplaceRarest()
    {
        if (_series.Count < _places || _places == 0) return;
        ref var best = ref _candidates.Best();
        int rarest = 0;
        for (int place = 1; place < _series.Count; place++)
            if (_series[place].RecentEvents < _series[rarest].RecentEvents) rarest = place;
        if (best.Count < LeastEvents || best.Count <= 2 * _series[rarest].RecentEvents) return;
        _discarded.Add(_series[rarest].RollUp);
        _series[rarest] = CreateSeries(rarest, best, _series[rarest].Generation + 1);
        best.Count = 0;
    }

    private SliceSeries CreateSeries(int place, in SliceCandidates.Candidate candidate, int generation)
    {
        var series = new SliceSeries(CreateRollUp(PlaceName(place)))
        {
            Hash = candidate.Hash,
            Text = candidate.Text.ToString(),
            RecentEvents = candidate.Count,
            Generation = generation,
        };
        series.RollUp.MoveTo(_minute);
        return series;
    }

    private RollUp CreateRollUp(string name) =>
        new($"{_part}/{name}", LabelSums.Numbers, LogOddsBins.Count, LogOddsBins.CellWidth, cellsPerTallyAtFirst: 8, _levels);

    private static string PlaceName(int place) => FormattableString.Invariant($"{place}");
}
