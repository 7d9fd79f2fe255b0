using System.Collections.Immutable;
using System.Runtime.CompilerServices;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Health.Drift;

/// <summary>
/// Counts into which cells the features' values fall, by the hour and over the reference period. Thinned by a fixed rule, so that it costs little on busy streams:
/// every n-th event counts n times, n being a power of two for which the hour before would have given 128 to 256; n doubles within an hour that is much busier.
/// </summary>
internal sealed class DriftLedger
{
    private const string Part = "health/drift";
    private const long CountedPerHour = 128;
    private const int MinutesOfHour = 60;
    private const int MinutesOfDay = 24 * MinutesOfHour;

    private readonly ImmutableArray<DriftProbe> _probes;
    private readonly DriftReference _reference;
    private readonly RollUp _rollUp;
    private readonly (int Feature, int Field)[] _fields; // every field that decides whether a feature's value is missing
    private readonly int[] _figures; // the histories
    private readonly int _hashedSlots;
    private readonly int _logOddsProbe;
    private readonly int _cells;
    private long _eventsOfHour;
    private long _countedOfHour;
    private long _every = 1; // a power of two
    private DriftCounts? _referenceCopy;

    public DriftLedger(EngineDefinition definition, RecordSchema schema)
    {
        _hashedSlots = definition.Learning.Slots;
        var probes = ImmutableArray.CreateBuilder<DriftProbe>();
        foreach (var feature in definition.Features)
        {
            var (source, fields) = SourceOf(feature, schema);
            probes.Add(new DriftProbe(feature.Name, source, fields, _cells));
            _cells += probes[^1].Cells;
        }
        _logOddsProbe = probes.Count;
        probes.Add(new DriftProbe("published log-odds", DriftSource.LogOdds, [], _cells));
        _cells += probes[^1].Cells;
        _probes = probes.ToImmutable();
        _figures = [.. Enumerable.Range(0, _probes.Length).Where(feature => _probes[feature].Source == DriftSource.Figure)];
        _fields = [.. _probes.SelectMany((probe, feature) => probe.Fields.Select(field => (feature, field)))];

        int numbers = DriftCounts.NumbersOf(_probes.Length);
        _reference = new DriftReference(definition.Health.Reference, numbers, _cells);
        _rollUp = new RollUp(Part, numbers, _cells, width: 1, cellsPerTallyAtFirst: Math.Min(_cells, 256), LevelsOf(definition.Health));
    }

    /// <summary>Whether the next event is one of those that are counted.</summary>
    public bool IsNextCounted() => (++_eventsOfHour & (_every - 1)) == 0;

    /// <summary>Counts an event of which <see cref="IsNextCounted"/> said that it is one.</summary>
    [MethodImpl(MethodImplOptions.NoInlining)] // it is rare
    public void Count(RecordBatch records, int record, VectorBuilder vector, double logOdds, long clockMicroseconds)
    {
        bool isReference = _reference.Contains(clockMicroseconds);
        double weight = _every;
        AddTo(_rollUp.Numbers, weight);
        if (isReference) AddTo(_reference.Numbers, weight);
        var fields = records.Fields(record);
        int missing = -1;
        foreach (var (feature, field) in _fields)
        {
            var probe = _probes[feature];
            if (!fields[field].IsPresent)
            {
                // Crossed fields come one after the other and are missing once.
                if (feature != missing) CountMissing(feature, weight, isReference);
                missing = feature;
            }
            else if (probe.Source == DriftSource.Number) CountNumber(probe, fields[field].Number, weight, isReference);
        }
        CountCategories(vector, weight, isReference);
        CountFigures(vector, weight, isReference);
        CountNumber(_probes[_logOddsProbe], logOdds, weight, isReference);
        if (++_countedOfHour < 2 * CountedPerHour) return;
        _every *= 2;
        _countedOfHour = CountedPerHour;
    }

    /// <summary>Counts the features of an event with a value that no event had before.</summary>
    [MethodImpl(MethodImplOptions.NoInlining)] // it is rare
    public void CountUnseen(VectorBuilder vector, long clockMicroseconds)
    {
        bool isReference = _reference.Contains(clockMicroseconds);
        foreach (int feature in vector.UnseenFeatures)
        {
            _rollUp.Numbers[DriftCounts.Unseen(feature)]++;
            if (isReference) _reference.Numbers[DriftCounts.Unseen(feature)]++;
        }
    }

    /// <summary>Counts the labels of the reference period.</summary>
    public void CountLabels(LabelRun labels)
    {
        // A run lies within a minute.
        if (!_reference.Contains(labels.Clocks[0])) return;
        ReadOnlySpan<double> weights = labels.Weights, outcomes = labels.Labels;
        double weight = _reference.LabelWeight, positive = _reference.LabelPositive;
        for (int i = 0; i < weights.Length; i++)
        {
            weight += weights[i];
            positive += weights[i] * outcomes[i];
        }
        (_reference.LabelWeight, _reference.LabelPositive) = (weight, positive);
    }

    public void StartHour(long minute)
    {
        long wanted = Math.Max(_eventsOfHour / CountedPerHour, 1);
        _every = 1L << (int)long.Log2(wanted);
        _eventsOfHour = _countedOfHour = 0;
        _rollUp.MoveTo(minute);
    }

    public DriftFigures Window(long lastMinute, long minutes, long clockMicroseconds) =>
        new(_probes, ReferenceCopy(clockMicroseconds), Counts(lastMinute, minutes), _reference.IsComplete(clockMicroseconds));

    /// <summary>The drift of one feature, or of the one that moved most where <paramref name="name"/> is null; NaN where it cannot be told.</summary>
    public double PsiOf(string? name, long lastMinute, long minutes, long clockMicroseconds, out string feature)
    {
        feature = name ?? "";
        if (!_reference.IsComplete(clockMicroseconds)) return double.NaN;
        var window = Counts(lastMinute, minutes);
        double largest = double.NaN;
        foreach (var probe in _probes)
        {
            if (probe.Source == DriftSource.None || (name is not null && probe.Name != name)) continue;
            double psi = DriftComparison.PsiOf(probe, ReferenceCopy(clockMicroseconds), window, out _);
            if (!(psi <= largest)) (largest, feature) = (psi, probe.Name);
        }
        return largest;
    }

    /// <summary>The largest share of a feature's values that were missing, or new, over a window.</summary>
    public double LargestShare(bool ofUnseen, string? name, long lastMinute, long minutes, out string feature)
    {
        feature = name ?? "";
        var window = Counts(lastMinute, minutes).Numbers;
        double total = window[DriftCounts.Weight], largest = double.NaN;
        for (int i = 0; i < _probes.Length && total > 0; i++)
        {
            if (_probes[i].Source is DriftSource.None or DriftSource.LogOdds || (name is not null && _probes[i].Name != name)) continue;
            double share = window[ofUnseen ? DriftCounts.Unseen(i) : DriftCounts.Missing(i)] / total;
            if (!(share <= largest)) (largest, feature) = (share, _probes[i].Name);
        }
        return largest;
    }

    public ReferenceFigures Reference(long clockMicroseconds) => new(
        _reference.FromMicroseconds, _reference.ToMicroseconds, _reference.IsComplete(clockMicroseconds),
        (long)_reference.Numbers[DriftCounts.Weight], _reference.LabelPositive / _reference.LabelWeight);

    public void Save(StateBlocks changes)
    {
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(_cells);
        writer.Write(_eventsOfHour);
        writer.Write(_countedOfHour);
        writer.Write(_every);
        _reference.Save(writer);
        foreach (var probe in _probes) probe.Quantiles?.Save(writer);
        changes.Put(Part + "/reference", 0, bytes.ToArray());
        _rollUp.Save(changes);
    }

    public void Load(StateBlocks state)
    {
        if (state.Find(Part + "/reference", 0) is not { } bytes) return;
        using var reader = new BinaryReader(new MemoryStream(bytes));
        if (reader.ReadInt32() != _cells) throw new InvalidStateException($"the state has other cells in {Part}");
        _eventsOfHour = reader.ReadInt64();
        _countedOfHour = reader.ReadInt64();
        _every = reader.ReadInt64();
        _reference.Load(reader);
        foreach (var probe in _probes) probe.Quantiles?.Load(reader);
        _rollUp.Load(state);
    }

    private static (DriftSource Source, int[] Fields) SourceOf(FeatureOptions feature, RecordSchema schema) => feature switch
    {
        NumberFeature number => (DriftSource.Number, [schema.IndexOf(number.Field)]),
        NumberCycleFeature cycle => (DriftSource.Number, [schema.IndexOf(cycle.Field)]),
        CategoryFeature category => (DriftSource.Category, [.. category.Fields.Select(schema.IndexOf)]),
        BucketFeature bucket => (DriftSource.Number, [schema.IndexOf(bucket.Field)]),
        TextFeature text => (DriftSource.Category, [schema.IndexOf(text.Field)]),
        HistoryFeature => (DriftSource.Figure, []),
        _ => (DriftSource.None, []),
    };

    /// <summary>Hours as far back as the longest window, days where that is beyond what is kept of hours.</summary>
    private static RollUpRetention[] LevelsOf(HealthOptions options)
    {
        int longestMinutes = (int)(options.Windows.Select(w => w.LengthMicroseconds).DefaultIfEmpty(0).Max() / 60_000_000);
        int hours = Math.Min((longestMinutes + MinutesOfHour - 1) / MinutesOfHour, options.History.Hours);
        int days = (longestMinutes + MinutesOfDay - 1) / MinutesOfDay;
        var hourly = new RollUpRetention(MinutesOfHour, Math.Max(hours, 1), Math.Max(hours, 1));
        return longestMinutes > hours * MinutesOfHour ? [hourly, new RollUpRetention(MinutesOfDay, days, days)] : [hourly];
    }

    private static void AddTo(Span<double> numbers, double weight)
    {
        numbers[DriftCounts.Weight] += weight;
        numbers[DriftCounts.SquaredWeight] += weight * weight;
    }

    private void CountCategories(VectorBuilder vector, double weight, bool isReference)
    {
        var slots = vector.Vector.Slots;
        for (int i = 0; i < slots.Length; i++)
        {
            var probe = _probes[vector.Features[i]];
            if (probe.Source == DriftSource.Category && slots[i] < _hashedSlots)
                AddToCell(probe.FirstCell + slots[i] % DriftProbe.CategoryCells, weight, isReference);
        }
    }

    private void CountFigures(VectorBuilder vector, double weight, bool isReference)
    {
        foreach (int feature in _figures)
        {
            double figure = vector.Figures[feature];
            if (double.IsFinite(figure)) CountNumber(_probes[feature], figure, weight, isReference);
            else CountMissing(feature, weight, isReference);
        }
    }

    private void CountMissing(int feature, double weight, bool isReference)
    {
        _rollUp.Numbers[DriftCounts.Missing(feature)] += weight;
        if (isReference) _reference.Numbers[DriftCounts.Missing(feature)] += weight;
        var probe = _probes[feature];
        if (probe.Quantiles is not null) AddToCell(probe.FirstCell + probe.Cells - 1, weight, isReference);
    }

    private void CountNumber(DriftProbe probe, double value, double weight, bool isReference)
    {
        var quantiles = probe.Quantiles!;
        if (quantiles.IsCut)
        {
            AddToCell(probe.FirstCell + quantiles.CellOf(value), weight, isReference);
            return;
        }
        if (!quantiles.Wait(value, weight)) return;
        for (int i = 0; i < quantiles.Waiting.Length; i++)
            AddToCell(probe.FirstCell + quantiles.CellOf(quantiles.Waiting[i]), quantiles.WaitingWeights[i], isReference);
        quantiles.ForgetWaiting();
    }

    private void AddToCell(int cell, double weight, bool isReference)
    {
        _rollUp.Tally.Use(cell) += weight;
        if (isReference) _reference.Cells[cell] += weight;
    }

    private DriftCounts Counts(long lastMinute, long minutes)
    {
        var numbers = new double[DriftCounts.NumbersOf(_probes.Length)];
        var tally = new Tally(_cells, 1);
        _rollUp.Window(lastMinute, minutes, numbers, tally);
        return DriftCounts.Of(numbers, tally);
    }

    private DriftCounts ReferenceCopy(long clockMicroseconds)
    {
        if (_referenceCopy is not null) return _referenceCopy;
        var copy = _reference.Copy();
        // Once its time is over it changes no more.
        if (clockMicroseconds >= _reference.ToMicroseconds) _referenceCopy = copy;
        return copy;
    }
}
