using System.Text;
using StreamLogit.Engine.Awaiting;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Features.Histories;
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

    // How many records ahead memory is asked for: far enough for it to come, near enough for it to stay.
    private const int IndexAhead = 16;
    private const int EventAhead = 8;
    private const int MarkAhead = 4;

    private readonly FeatureEncoder _encoder;
    private readonly Bank _bank;
    private readonly StreamClock _clock;
    private readonly AwaitingStore _awaiting;
    private readonly EarlyLabels _early;
    private readonly ComingLabels _coming = new();
    private readonly HealthLedger _health;
    private readonly ReasonFinder _reasons;
    private readonly double[] _logOdds; // of every setting for the event at hand
    private readonly double[] _coefficients;
    private long _records;
    private long _version; // labels learned, corrections included
    private LabelEvents _events;
    private long _savedAwaiting; // in the state that was taken up
    private long _savedEarly;

    /// <summary>An engine that has seen nothing.</summary>
    /// <param name="definition">What it computes.</param>
    /// <param name="archive">Where it puts what it has no room for in memory, or null where all stays in memory.</param>
    /// <exception cref="InvalidStateException">The definition's warm start was fitted with other features.</exception>
    public ScoringEngine(EngineDefinition definition, IBlockArchive? archive = null)
    {
        Definition = definition;
        Schema = new RecordSchema(definition);
        _encoder = new FeatureEncoder(definition, Schema, archive);
        _bank = new Bank(
            definition.Learning, _encoder.SlotCount, _encoder.FirstDenseSlot, forgetHalfLifeOf: _encoder.IsAnyForgotten ? _encoder.ForgetHalfLifeOf : null);
        _clock = new StreamClock(definition.Record.AheadMicroseconds);
        _awaiting = new AwaitingStore(
            _bank.Names, definition.Labels.WaitMicroseconds, definition.Labels.Unlabelled == UnlabelledEvents.Negative, definition.Labels.MemoryBytes, archive,
            _encoder.LabelKeys.Length);
        _early = new EarlyLabels(definition.Labels.EarlyMicroseconds);
        _health = new HealthLedger(definition, Schema, _bank.Names);
        _reasons = new ReasonFinder(definition.Features.Length);
        _logOdds = new double[_bank.SettingCount];
        _coefficients = new double[_encoder.MaximumEntries];
        if (definition.Learning.WarmStart is { } fitted) StartFrom(fitted);
    }

    /// <summary>What the engine was made for.</summary>
    public EngineDefinition Definition { get; }

    /// <summary>The fields that it reads; a decoder and batches are made for it.</summary>
    public RecordSchema Schema { get; }

    /// <summary>Whether scores are given their reasons, which costs time and changes nothing else. Default true.</summary>
    public bool GiveReasons { get; set; } = true;

    /// <summary>Whether health is counted. Off only to measure what it costs.</summary>
    internal bool CountsHealth
    {
        get => _health.IsOn;
        set => _health.IsOn = value;
    }

    /// <summary>Is shown every event whose label becomes known, before the engine learns from it; for fits, baselines and comparisons. Changes nothing.</summary>
    public LabelledEventTaker? Labelled { get; set; }

    /// <summary>Is shown every event whose label is corrected, with the right label, before the engine learns that. Changes nothing.</summary>
    public LabelledEventTaker? Corrected { get; set; }

    /// <summary>The parts of the state that the engine reads from its archive, where it has one, and not from the blocks that it loads.</summary>
    public static IReadOnlyList<string> ArchivedParts { get; } = [AwaitingStore.SegmentsPart, KeyTable.EvictedPart];

    /// <summary>The one of them that has very many small blocks, of about a hundred bytes.</summary>
    public static string SmallBlocksPart => KeyTable.EvictedPart;

    /// <summary>The slots that events have used so far, with their names.</summary>
    public IEnumerable<(int Slot, string Name)> UsedSlots => _encoder.UsedSlots();

    /// <summary>An empty batch for the scores of this engine.</summary>
    public ScoreBatch CreateScoreBatch() => new(Definition.Decision.Reasons);

    /// <summary>Runs decoded records through the engine and adds to <paramref name="scores"/> what is to be published. Unusable ones become rejects.</summary>
    public void Process(RecordBatch records, ScoreBatch scores)
    {
        for (int i = 0; i < records.Count; i++)
        {
            LookAhead(records, i);
            _records++;
            if (records.Records[i].Kind != RecordKind.Reject) Take(records, i, scores);
            if (records.Records[i].Kind == RecordKind.Reject) ListReject(records, i);
        }
    }

    /// <summary>
    /// Ends a stream that is known to bring nothing more: labels that came with their events and would become known later are taken, in their order, and
    /// labels that still wait for their event become rejects of <paramref name="records"/>,
    /// a batch that the engine has processed already or an empty one.
    /// </summary>
    public void End(RecordBatch records)
    {
        TakeComingLabels(records, long.MaxValue);
        RejectEarlyLabels(records, clockMicroseconds: long.MaxValue);
    }

    /// <summary>How the published probabilities are doing.</summary>
    public HealthSnapshot Health()
    {
        TellSettings();
        return _health.Snapshot(_clock.Now) with
        {
            Records = _records,
            Events = _encoder.Events,
            Awaiting = _awaiting.Awaiting,
            AwaitingBytes = _awaiting.MemoryBytes + _coming.Bytes,
            Early = _early.Count,
            Expired = _events.Expired,
            Thinned = _events.Thinned,
            Repeated = _events.Repeated,
            Corrected = _events.Corrected,
            TaughtAtOnce = _events.TaughtAtOnce,
            CollidedEvents = _encoder.CollidedEvents,
            Histories = _encoder.HistoryFigures,
            Settings = [.. Enumerable.Range(0, _bank.SettingCount).Select(FiguresOf)],
        };
    }

    /// <summary>The coefficients with their names.</summary>
    public ModelSnapshot Model()
    {
        var slots = _encoder.UsedSlots().ToList();
        return new ModelSnapshot(
            _version,
            [.. Enumerable.Range(0, _bank.SettingCount).Select(setting => new SettingModel(
                _bank.Names[setting],
                _bank.Intercept(setting),
                [.. slots.Select(s => new NamedCoefficient(s.Name, _bank.Coefficient(s.Slot, setting)))]))],
            [.. Enumerable.Range(0, _bank.SettingCount).Select(setting => new BlendWeight(_bank.Names[setting], _bank.BlendWeight(setting)))]);
    }

    /// <summary>Goes on with a scan for the largest coefficients. Changes nothing.</summary>
    /// <param name="scan">The scan.</param>
    /// <param name="slots">How many slots are looked at now.</param>
    /// <returns>What was found, when the scan has come to the end and begins again; else null.</returns>
    public LargestCoefficients? Scan(CoefficientScan scan, int slots) =>
        scan.Continue(_encoder, _bank, slots) ? scan.Take(_encoder, _version, _clock.Now, _bank.PublishedIntercept()) : null;

    /// <summary>Makes a model of coefficients that were fitted to the events that this engine has encoded.</summary>
    /// <param name="intercept">The intercept.</param>
    /// <param name="coefficient">Gives the coefficient of a slot.</param>
    public FittedModel ToFittedModel(double intercept, Func<int, double> coefficient) => new()
    {
        SlotMeaning = Fingerprint(),
        Intercept = intercept,
        Coefficients = [.. _encoder.UsedSlots().Select(s => new FittedCoefficient(s.Slot, s.Name, coefficient(s.Slot))).Where(c => c.Value != 0)],
        Scales = [.. _encoder.Scales()],
    };

    /// <summary>Puts what changed since the last call into <paramref name="changes"/>, which the caller keeps with all earlier ones.</summary>
    public void Save(StateBlocks changes)
    {
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(Fingerprint());
        writer.Write(_records);
        writer.Write(_version);
        writer.Write(_events.Expired);
        writer.Write(_events.Thinned);
        writer.Write(_events.Repeated);
        writer.Write(_events.Corrected);
        writer.Write(_events.TaughtAtOnce);
        writer.Write(_awaiting.Awaiting);
        writer.Write((long)_early.Count);
        _clock.Save(writer);
        changes.Put(Part, 0, bytes.ToArray());
        _encoder.Save(changes);
        _bank.Save(changes);
        _awaiting.Save(changes);
        _early.Save(changes);
        _coming.Save(changes);
        _health.Save(changes);
    }

    /// <summary>
    /// Takes up a state that was saved. Only on an engine that has seen nothing. The definition may have another bank than the state: settings
    /// that both have go on, new ones start from the coefficients of the blend.
    /// </summary>
    /// <returns>Which settings went on, which started and which were dropped.</returns>
    /// <exception cref="InvalidStateException">The state is damaged or belongs to another definition.</exception>
    public BankChange Load(StateBlocks state)
    {
        var change = LoadModel(state);
        _encoder.LoadHistories(state);
        _awaiting.Load(state);
        _early.Load(state);
        _coming.Load(state);
        _health.Load(state);
        return change;
    }

    /// <summary>Takes up of a saved state what health tells, and the model: for looking into it, without reading every kept event.</summary>
    /// <returns>Health as it stood when the state was saved, without memory and histories.</returns>
    /// <exception cref="InvalidStateException">The state is damaged or belongs to another definition.</exception>
    public HealthSnapshot LoadHealth(StateBlocks state)
    {
        LoadModel(state);
        _health.Load(state);
        return Health() with { Awaiting = _savedAwaiting, Early = _savedEarly, AwaitingBytes = 0 };
    }

    /// <summary>Takes up of a saved state what <see cref="Model"/> tells, and no more: for looking into it.</summary>
    /// <exception cref="InvalidStateException">The state is damaged or belongs to another definition.</exception>
    public BankChange LoadModel(StateBlocks state)
    {
        byte[] bytes = state.Find(Part, 0) ?? throw new InvalidStateException("the state holds no engine");
        using var reader = new BinaryReader(new MemoryStream(bytes));
        string saved = reader.ReadString();
        if (saved != Fingerprint())
            throw new InvalidStateException(
                "the state was made with other features, slots or a hash seed, whose coefficients mean something else; "
                + $"give the changed definition a state folder of its own\nthe state's: {saved}\nthe definition's: {Fingerprint()}");
        _records = reader.ReadInt64();
        _version = reader.ReadInt64();
        _events = new LabelEvents
        {
            Expired = reader.ReadInt64(),
            Thinned = reader.ReadInt64(),
            Repeated = reader.ReadInt64(),
            Corrected = reader.ReadInt64(),
            TaughtAtOnce = reader.ReadInt64(),
        };
        (_savedAwaiting, _savedEarly) = (reader.ReadInt64(), reader.ReadInt64());
        _clock.Load(reader);
        _encoder.Load(state);
        return _bank.Load(state);
    }

    private void Take(RecordBatch records, int index, ScoreBatch scores)
    {
        // A copy: the batch may grow, and move its records, when labels that waited in vain are added to it.
        var record = records.Records[index];
        if (!_clock.Accepts(record.TimeMicroseconds))
        {
            records.Reject(index, RejectReason.TimeAhead, $"the time is too far ahead of the stream's clock; {StreamClock.RecordsThatMoveOn} such records in a row would move the clock");
            return;
        }
        TakeComingLabels(records, record.TimeMicroseconds);
        MoveClock(records, record.TimeMicroseconds);
        if (record.Kind == RecordKind.Label) TakeLabel(records, index, record);
        else TakeEvent(records, index, record, scores);
    }

    private void TakeEvent(RecordBatch records, int index, in DecodedRecord record, ScoreBatch scores)
    {
        var id = records.Id(index);
        if (_awaiting.TryFind(id, record.IdHash, out _))
        {
            records.Reject(index, RejectReason.IdReused, "an event with this id was scored and is still kept for its label");
            return;
        }

        long eventsBefore = _encoder.Events;
        var vector = _encoder.Encode(records, index);
        var encoded = vector.Vector;
        double logOdds = _bank.Score(encoded, record.TimeMicroseconds, _logOdds);
        double probability = Elementary.Sigmoid(logOdds);
        bool isAlert = probability >= Definition.Decision.Cutoff;
        ulong slices = _health.CountEvent(records, index, vector, logOdds, probability, isAlert, _clock.Microseconds);
        long? knownAt = KnownAt(record);
        bool isLabelled = record.Kind == RecordKind.LabelledEvent && knownAt is null;
        if (!isLabelled || Definition.Decision.PublishLabelled)
            Publish(index, logOdds, probability, isAlert, vector, eventsBefore, scores);

        if (isLabelled)
        {
            _events.TaughtAtOnce++;
            var label = new CountedLabel
            {
                LogOdds = logOdds,
                Weight = double.IsNaN(record.Weight) ? 1 : record.Weight,
                ClockMicroseconds = _clock.Microseconds,
                ScoredAtMicroseconds = _clock.Microseconds,
                Slices = slices,
                Label = record.Label,
                StandsFor = 1,
                Alert = isAlert ? 1 : 0,
            };
            Learn(record.IdHash, encoded, _logOdds, isFresh: true, label);
            _encoder.Learn(_encoder.LabelKeys, record.TimeMicroseconds, label.Label, label.Weight);
        }
        else if (IsKept(probability, record.IdHash, out int standsFor))
        {
            var header = new KeptHeader
            {
                IdHash = record.IdHash,
                ScoredAtMicroseconds = _clock.Microseconds,
                TimeMicroseconds = record.TimeMicroseconds,
                LogOdds = logOdds,
                Weight = record.Weight,
                Slices = slices,
                Alert = isAlert ? 1 : 0,
                StandsFor = standsFor,
            };
            var place = _awaiting.Add(header, _logOdds, encoded, id, _encoder.LabelKeys);
            while (_early.Take(id, record.IdHash) is { } early) Learn(place, early.Label, early.Weight);
            if (knownAt is not { } time) return;
            _coming.Add(new ComingLabel(time, place.Segment, place.Offset, record.Label));
            TakeComingLabels(records, _clock.Microseconds);
        }
        else _events.Thinned++;
    }

    private void TakeLabel(RecordBatch records, int index, in DecodedRecord record)
    {
        var id = records.Id(index);
        if (_awaiting.TryFind(id, record.IdHash, out var place)) Learn(place, record.Label, record.Weight);
        else if (Definition.Labels.EarlyMicroseconds == 0) records.Reject(index, RejectReason.LabelUnknownEvent, "no event with this id is kept");
        else
        {
            _early.Add(record.IdHash, new EarlyLabel(
                Encoding.UTF8.GetString(id), record.Label, record.Weight, _clock.Microseconds,
                records.OriginOf(index), record.Position, records.RecordBytes(index).ToArray()));
        }
    }

    private void LookAhead(RecordBatch records, int index)
    {
        var all = records.Records;
        if (index + IndexAhead < all.Length) _awaiting.WantIndex(all[index + IndexAhead].IdHash);
        if (index + EventAhead < all.Length && all[index + EventAhead].Kind == RecordKind.Label) _awaiting.WantEvent(all[index + EventAhead].IdHash);
        if (index + MarkAhead < all.Length && all[index + MarkAhead].Kind == RecordKind.Label) _awaiting.WantMark(all[index + MarkAhead].IdHash);
    }

    /// <summary>When the label that stands in an event becomes known, or null where there is none or nothing says so.</summary>
    private long? KnownAt(in DecodedRecord record)
    {
        if (record.Kind != RecordKind.LabelledEvent) return null;
        if (record.LabelTimeMicroseconds != DecodedRecord.NoTime) return record.LabelTimeMicroseconds;
        return record.TimeMicroseconds + Definition.Labels.DelayMicroseconds;
    }

    /// <summary>
    /// Takes the labels that came with their events and are known at a time, as if each stood in the stream as a record of its own. A label that becomes
    /// known when its event is not kept any more teaches nothing; the event has been counted as one whose wait ended.
    /// </summary>
    private void TakeComingLabels(RecordBatch records, long timeMicroseconds)
    {
        while (_coming.TryTake(timeMicroseconds, out var label))
        {
            MoveClock(records, label.KnownAtMicroseconds);
            if (_awaiting.Holds(label.Place)) Learn(label.Place, (int)label.Label, double.NaN);
        }
    }

    private void MoveClock(RecordBatch records, long timeMicroseconds)
    {
        _clock.MoveTo(timeMicroseconds);
        if (_health.IsMinuteOver(_clock.Microseconds) && !_health.TryKeepOpen(_clock.Microseconds))
        {
            TellSettings();
            _health.StartMinute(_clock.Microseconds);
        }
        LetGo();
        RejectEarlyLabels(records, _clock.Microseconds);
    }

    /// <summary>Ends the wait of the events that have waited long enough by the clock.</summary>
    private void LetGo()
    {
        if (!_awaiting.IsDue(_clock.Microseconds)) return;
        int expired = 0;
        if (Definition.Labels.Unlabelled == UnlabelledEvents.Negative)
        {
            for (; _awaiting.TryTakeExpired(_clock.Microseconds, out var place); expired++)
                _awaiting.Mark(place, new LabelMark(EventState.AssumedGood, LearnFirst(place, label: 0, weight: double.NaN, isAssumed: true)));
        }
        expired += _awaiting.Forget(_clock.Microseconds);
        _events.Expired += expired;
        _health.CountExpired(expired);
    }

    /// <summary>Takes a label for a kept event: the first one, the same again, or one that corrects it.</summary>
    private void Learn(EventPlace place, int label, double weight)
    {
        var mark = _awaiting.MarkOf(place);
        var state = label == 1 ? EventState.Bad : EventState.Good;
        int? known = mark.State switch
        {
            EventState.Bad => 1,
            EventState.Good or EventState.AssumedGood => 0,
            _ => null,
        };
        if (known is null)
        {
            _awaiting.Mark(place, new LabelMark(state, LearnFirst(place, label, weight, isAssumed: false)));
            return;
        }
        if (known == label) _events.Repeated++;
        if (mark.State == EventState.AssumedGood)
        {
            ref readonly var header = ref _awaiting.At(place).Header;
            _health.CountConfirmed(header.ScoredAtMicroseconds, header.StandsFor);
        }
        _awaiting.Mark(place, new LabelMark(state, known == label ? mark.Count : Correct(place, label, weight, mark.Count)));
    }

    /// <summary>Learns from an event as it was at scoring. A label that is only assumed, because the wait is over, has taken no time to come.</summary>
    private LabelCount LearnFirst(EventPlace place, int label, double weight, bool isAssumed)
    {
        var scored = _awaiting.At(place);
        ref readonly var header = ref scored.Header;
        var counted = Counted(header, label, scored.WeightOf(weight));
        if (isAssumed) counted.StandsFor = 0;
        _encoder.Learn(scored.LabelKeys, header.TimeMicroseconds, label, counted.Weight);
        return Learn(header.IdHash, scored.Vector, _awaiting.LogOddsOf(place), isFresh: false, counted);
    }

    private CountedLabel Counted(in KeptHeader header, int label, double weight) => new()
    {
        LogOdds = header.LogOdds,
        Weight = weight,
        ClockMicroseconds = _clock.Microseconds,
        ScoredAtMicroseconds = header.ScoredAtMicroseconds,
        Slices = header.Slices,
        Label = label,
        StandsFor = header.StandsFor,
        Alert = header.Alert,
    };

    private LabelCount Learn(ulong idHash, in EncodedVector vector, ReadOnlySpan<double> scoredLogOdds, bool isFresh, in CountedLabel label)
    {
        Labelled?.Invoke(new LabelledEvent
        {
            IdHash = idHash,
            Vector = vector,
            SettingLogOdds = scoredLogOdds,
            LogOdds = label.LogOdds,
            Label = label.Label,
            Weight = label.Weight,
            TakenBackWeight = 0,
            ScoredAtMicroseconds = label.ScoredAtMicroseconds,
            KnownAtMicroseconds = _clock.Microseconds,
        });
        _bank.Learn(vector, scoredLogOdds, isFresh, label.Label, label.Weight, _clock.Microseconds);
        _version++;
        return _health.CountLabel(label);
    }

    /// <summary>Learns the opposite of what was learned before, from the same features; health counts the event by its final truth.</summary>
    private LabelCount Correct(EventPlace place, int label, double weight, in LabelCount count)
    {
        var scored = _awaiting.At(place);
        weight = scored.WeightOf(weight);
        var logOdds = _awaiting.LogOddsOf(place);
        Corrected?.Invoke(new LabelledEvent
        {
            IdHash = scored.Header.IdHash,
            Vector = scored.Vector,
            SettingLogOdds = logOdds,
            LogOdds = scored.Header.LogOdds,
            Label = label,
            Weight = weight,
            TakenBackWeight = count.Weight,
            ScoredAtMicroseconds = scored.Header.ScoredAtMicroseconds,
            KnownAtMicroseconds = _clock.Microseconds,
        });
        _bank.TakeBack(logOdds, 1 - label, count.Weight);
        _bank.Learn(scored.Vector, logOdds, isFresh: false, label, weight, _clock.Microseconds);
        _encoder.Learn(scored.LabelKeys, scored.Header.TimeMicroseconds, 1 - label, -count.Weight);
        _encoder.Learn(scored.LabelKeys, scored.Header.TimeMicroseconds, label, weight);
        _version++;
        _events.Corrected++;
        return _health.CorrectLabel(count, Counted(scored.Header, label, weight));
    }

    /// <summary>Whether an event is kept for its label, and how many events like it it stands for.</summary>
    private bool IsKept(double probability, ulong idHash, out int standsFor)
    {
        standsFor = 1;
        if (Definition.Labels.Keep is not { } keep || probability >= keep.Above) return true;
        standsFor = keep.OneIn;
        return idHash % (uint)keep.OneIn == 0;
    }

    private void RejectEarlyLabels(RecordBatch records, long clockMicroseconds)
    {
        while (_early.TakeExpired(clockMicroseconds) is { } label)
        {
            records.ListLateReject(label.Origin, label.Position, label.Record, RejectReason.LabelUnknownEvent, "no event with this id is kept, and none came in time");
            _health.CountReject(RejectReason.LabelUnknownEvent);
        }
    }

    private void ListReject(RecordBatch records, int index)
    {
        records.ListReject(index);
        _health.CountReject(records.Records[index].Reason);
    }

    private void Publish(
        int record, double logOdds, double probability, bool isAlert, VectorBuilder vector, long eventsBefore, ScoreBatch scores)
    {
        ref var score = ref scores.Add(out var reasons);
        score = new Score
        {
            Record = record,
            Probability = probability,
            LogOdds = logOdds,
            IsAlert = isAlert,
            Version = _version,
        };
        if (!GiveReasons || reasons.Length == 0) return;
        var coefficients = _coefficients.AsSpan(0, vector.Count);
        _bank.PublishedCoefficients(vector.Vector, coefficients);
        score.ReasonCount = _reasons.Find(vector, coefficients, eventsBefore, reasons);
    }

    /// <summary>Tells health what the settings of the bank have come to.</summary>
    private void TellSettings()
    {
        var totals = _health.Settings;
        for (int setting = 0; setting < _bank.SettingCount; setting++)
        {
            totals.LogLoss[setting] = _bank.LogLossTotal(setting);
            totals.Brier[setting] = _bank.BrierTotal(setting);
            totals.Weight[setting] = _bank.WeightTotal(setting);
        }
        _bank.BlendWeights(totals.BlendWeight);
    }

    private void StartFrom(FittedModel fitted)
    {
        if (fitted.SlotMeaning != Fingerprint())
            throw new InvalidStateException(
                "the warm start was fitted with other features, slots or a hash seed, whose coefficients mean something else; "
                + $"fit it again with this definition\nthe warm start's: {fitted.SlotMeaning}\nthe definition's: {Fingerprint()}");
        var coefficients = new double[_encoder.SlotCount];
        foreach (var (slot, feature, value) in fitted.Coefficients)
        {
            if ((uint)slot >= (uint)coefficients.Length) throw new InvalidStateException($"the warm start has no slot {slot} for '{feature}'");
            coefficients[slot] = value;
        }
        _bank.StartFrom(fitted.Intercept, coefficients);
        _encoder.StartFrom(fitted.Scales);
    }

    private SettingFigures FiguresOf(int setting)
    {
        double weight = _bank.WeightTotal(setting);
        return new(_bank.Names[setting], _bank.LogLossTotal(setting) / weight, _bank.BrierTotal(setting) / weight, _bank.BlendWeight(setting));
    }

    /// <summary>What gives every slot its meaning: a state may only be taken up where it is the same.</summary>
    private string Fingerprint() => string.Join("; ", Definition.Features.Select(f => f.Identity))
        + FormattableString.Invariant($"; slots {Definition.Learning.Slots}; seed {Definition.Learning.HashSeed}");
}
