using StreamLogit.Engine.Awaiting;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine;

/// <summary>
/// The one way in: takes records in their order and gives, for each, a score, a learning step or a reject.
/// Deterministic, without clock, I/O or threads; one thread at a time may use it.
/// </summary>
public sealed class ScoringEngine
{
    private const string Part = "engine";

    private readonly FeatureEncoder _encoder;
    private readonly Bank _bank;
    private readonly AwaitingStore _awaiting;
    private readonly HealthLedger _health;
    private readonly ReasonFinder _reasons;
    private readonly double[] _logOdds; // of every setting for the event at hand
    private readonly double[] _coefficients;
    private long _clockMicroseconds = long.MinValue;
    private long _records;
    private long _expired;

    /// <summary>An engine that has seen nothing.</summary>
    public ScoringEngine(EngineDefinition definition)
    {
        Definition = definition;
        Schema = new RecordSchema(definition);
        _encoder = new FeatureEncoder(definition, Schema);
        _bank = new Bank(definition.Learning, _encoder.SlotCount, _encoder.FirstDenseSlot);
        _awaiting = new AwaitingStore(_bank.SettingCount, definition.Labels.WaitMicroseconds);
        _health = new HealthLedger(definition.Health);
        _reasons = new ReasonFinder(definition.Features.Length);
        _logOdds = new double[_bank.SettingCount];
        _coefficients = new double[_encoder.MaximumEntries];
    }

    /// <summary>What the engine was made for.</summary>
    public EngineDefinition Definition { get; }

    /// <summary>The fields that it reads; a decoder and batches are made for it.</summary>
    public RecordSchema Schema { get; }

    /// <summary>Whether scores are given their reasons, which costs time and changes nothing else. Default true.</summary>
    public bool GiveReasons { get; set; } = true;

    /// <summary>Is shown every event whose label becomes known, before the engine learns from it; for fits, baselines and comparisons. Changes nothing.</summary>
    public LabelledEventTaker? Labelled { get; set; }

    private long? Clock => _clockMicroseconds == long.MinValue ? null : _clockMicroseconds;

    /// <summary>An empty batch for the scores of this engine.</summary>
    public ScoreBatch CreateScoreBatch() => new(Definition.Decision.Reasons);

    /// <summary>Runs decoded records through the engine and adds to <paramref name="scores"/> what is to be published. Unusable ones become rejects.</summary>
    public void Process(RecordBatch records, ScoreBatch scores)
    {
        for (int i = 0; i < records.Count; i++)
        {
            _records++;
            ref var record = ref records.Records[i];
            if (record.Kind == RecordKind.Label) TakeLabel(records, i, ref record);
            else if (record.Kind != RecordKind.Reject) TakeEvent(records, i, ref record, scores);
            if (record.Kind == RecordKind.Reject) _health.CountReject(record.Reason);
        }
    }

    /// <summary>How the published probabilities are doing.</summary>
    public HealthSnapshot Health() => _health.Snapshot(Clock) with
    {
        Records = _records,
        Events = _encoder.Events,
        Awaiting = _awaiting.Count,
        Expired = _expired,
        CollidedEvents = _encoder.CollidedEvents,
        Settings = [.. Enumerable.Range(0, _bank.SettingCount).Select(FiguresOf)],
    };

    /// <summary>The coefficients with their names.</summary>
    public ModelSnapshot Model()
    {
        var slots = _encoder.UsedSlots().ToList();
        return new ModelSnapshot(
            _health.Labelled,
            [.. Enumerable.Range(0, _bank.SettingCount).Select(setting => new SettingModel(
                _bank.Names[setting],
                _bank.Intercept(setting),
                [.. slots.Select(s => new NamedCoefficient(s.Name, _bank.Coefficient(s.Slot, setting)))]))],
            [.. Enumerable.Range(0, _bank.SettingCount).Select(setting => new BlendWeight(_bank.Names[setting], _bank.BlendWeight(setting)))]);
    }

    /// <summary>Puts what changed since the last call into <paramref name="changes"/>, which the caller keeps with all earlier ones.</summary>
    public void Save(StateBlocks changes)
    {
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(Fingerprint());
        writer.Write(_clockMicroseconds);
        writer.Write(_records);
        writer.Write(_expired);
        changes.Put(Part, 0, bytes.ToArray());
        _encoder.Save(changes);
        _bank.Save(changes);
        _awaiting.Save(changes);
        _health.Save(changes);
    }

    /// <summary>Takes up a state that was saved. Only on an engine that has seen nothing.</summary>
    /// <exception cref="InvalidStateException">The state is damaged or belongs to another definition.</exception>
    public void Load(StateBlocks state)
    {
        byte[] bytes = state.Find(Part, 0) ?? throw new InvalidStateException("the state holds no engine");
        using var reader = new BinaryReader(new MemoryStream(bytes));
        string saved = reader.ReadString();
        if (saved != Fingerprint())
            throw new InvalidStateException(
                "the state was made with other features, slots or a hash seed, whose coefficients mean something else; "
                + $"give the changed definition a state folder of its own\nthe state's: {saved}\nthe definition's: {Fingerprint()}");
        _clockMicroseconds = reader.ReadInt64();
        _records = reader.ReadInt64();
        _expired = reader.ReadInt64();
        _encoder.Load(state);
        _bank.Load(state);
        _awaiting.Load(state);
        _health.Load(state);
    }

    private void TakeEvent(RecordBatch records, int index, ref DecodedRecord record, ScoreBatch scores)
    {
        AdvanceClock(record.TimeMicroseconds);
        var id = records.Id(index);
        if (_awaiting.TryFind(id, record.IdHash, out _))
        {
            records.Reject(index, RejectReason.IdReused, "an event with this id is awaiting its label");
            return;
        }

        long eventsBefore = _encoder.Events;
        var vector = _encoder.Encode(records, index);
        var encoded = vector.Vector;
        double logOdds = _bank.Score(encoded, record.TimeMicroseconds, _logOdds);
        bool isLabelled = record.Kind == RecordKind.LabelledEvent;
        if (!isLabelled || Definition.Decision.PublishLabelled)
            Publish(index, logOdds, vector, eventsBefore, scores);

        if (isLabelled)
        {
            Learn(encoded, _logOdds, logOdds, isFresh: true, record.Label, double.IsNaN(record.Weight) ? 1 : record.Weight, _clockMicroseconds);
            return;
        }
        var header = new AwaitingHeader
        {
            IdHash = record.IdHash,
            ScoredAtMicroseconds = _clockMicroseconds,
            TimeMicroseconds = record.TimeMicroseconds,
            LogOdds = logOdds,
            Weight = record.Weight,
        };
        _awaiting.Add(header, _logOdds, encoded, id);
    }

    private void TakeLabel(RecordBatch records, int index, ref DecodedRecord record)
    {
        AdvanceClock(record.TimeMicroseconds);
        if (!_awaiting.TryFind(records.Id(index), record.IdHash, out var place))
        {
            records.Reject(index, RejectReason.LabelUnknownEvent, "no event with this id is awaiting its label");
            return;
        }
        LearnAwaiting(place, record.Label, record.Weight);
    }

    /// <summary>The clock is the highest time seen; whoever has waited too long by it is let go.</summary>
    private void AdvanceClock(long timeMicroseconds)
    {
        if (timeMicroseconds <= _clockMicroseconds) return;
        _clockMicroseconds = timeMicroseconds;
        while (_awaiting.TryFindExpired(_clockMicroseconds, out var place))
        {
            _expired++;
            if (Definition.Labels.Unlabelled == UnlabelledEvents.Negative) LearnAwaiting(place, label: 0, weight: double.NaN);
            else _awaiting.Remove(place);
        }
    }

    /// <summary>Learns from an event as it was at scoring. A weight that comes with the label goes before the event's own.</summary>
    private void LearnAwaiting(EventPlace place, int label, double weight)
    {
        var scored = _awaiting.At(place);
        ref readonly var header = ref scored.Header;
        if (double.IsNaN(weight)) weight = double.IsNaN(header.Weight) ? 1 : header.Weight;
        Learn(scored.Vector, scored.LogOdds, header.LogOdds, isFresh: false, label, weight, header.ScoredAtMicroseconds);
        _awaiting.Remove(place);
    }

    private void Learn(
        in EncodedVector vector, ReadOnlySpan<double> scoredLogOdds, double publishedLogOdds, bool isFresh, int label, double weight,
        long scoredAtMicroseconds)
    {
        Labelled?.Invoke(new LabelledEvent
        {
            Vector = vector,
            SettingLogOdds = scoredLogOdds,
            LogOdds = publishedLogOdds,
            Label = label,
            Weight = weight,
            ScoredAtMicroseconds = scoredAtMicroseconds,
            KnownAtMicroseconds = _clockMicroseconds,
        });
        _bank.Learn(vector, scoredLogOdds, isFresh, label, weight, _clockMicroseconds);
        _health.CountLabel(_clockMicroseconds, publishedLogOdds, label, weight);
    }

    private void Publish(int record, double logOdds, VectorBuilder vector, long eventsBefore, ScoreBatch scores)
    {
        double probability = Elementary.Sigmoid(logOdds);
        ref var score = ref scores.Add(out var reasons);
        score = new Score
        {
            Record = record,
            Probability = probability,
            LogOdds = logOdds,
            IsAlert = probability >= Definition.Decision.Cutoff,
            Version = _health.Labelled,
        };
        if (!GiveReasons || reasons.Length == 0) return;
        var coefficients = _coefficients.AsSpan(0, vector.Count);
        _bank.PublishedCoefficients(vector.Vector, coefficients);
        score.ReasonCount = _reasons.Find(vector, coefficients, eventsBefore, reasons);
    }

    private SettingFigures FiguresOf(int setting)
    {
        double weight = _health.LabelWeight;
        return new(_bank.Names[setting], _bank.LogLossTotal(setting) / weight, _bank.BrierTotal(setting) / weight, _bank.BlendWeight(setting));
    }

    /// <summary>What gives every slot its meaning: a state may only be taken up where it is the same.</summary>
    private string Fingerprint() => string.Join("; ", Definition.Features.Select(f => f switch
    {
        NumberFeature number => $"number {number.Name} scale {number.Scale}",
        _ => $"{f.GetType().Name} {f.Name}",
    })) + FormattableString.Invariant($"; slots {Definition.Learning.Slots}; seed {Definition.Learning.HashSeed}");
}
