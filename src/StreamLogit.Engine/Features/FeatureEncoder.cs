using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features.Histories;
using StreamLogit.Engine.Features.Text;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>Turns events into sparse vectors: first come the hashed slots of categories, behind them the dense slots of numbers and cycles.</summary>
internal sealed class FeatureEncoder
{
    private const string Part = "features/learned";
    private readonly Feature[] _features;
    private readonly SlotLedger _ledger;
    private readonly CoefficientNames _names = new();
    private readonly VectorBuilder _vector;
    private readonly HistoryRoom _histories;
    private readonly long[] _forgetHalfLives; // of the features

    public FeatureEncoder(EngineDefinition definition, RecordSchema schema, IBlockArchive? archive = null)
    {
        FirstDenseSlot = definition.Learning.Slots;
        var hashed = new HashedSlots(definition.Learning.Slots, definition.Learning.HashSeed);
        _histories = new HistoryRoom(schema, hashed);
        int next = FirstDenseSlot;
        _features = [.. definition.Features.Select(options =>
        {
            var feature = Create(options, schema, hashed, next);
            next += feature.DenseSlots;
            return feature;
        })];
        _ledger = new SlotLedger(next);
        MaximumEntries = _features.Sum(f => f.MaximumEntries);
        _vector = new VectorBuilder(_ledger, MaximumEntries, _features.Length);
        _forgetHalfLives = [.. definition.Features.Select(options => options.ForgetHalfLifeMicroseconds)];
        _histories.Start(definition.Histories.MemoryBytes, archive);
    }

    /// <summary>Where the slots of numbers and cycles start, which are the last ones.</summary>
    public int FirstDenseSlot { get; }

    /// <summary>All slots.</summary>
    public int SlotCount => _ledger.SlotCount;

    /// <summary>The most entries that a vector has.</summary>
    public int MaximumEntries { get; }

    /// <summary>Whether the coefficients of any feature fade by themselves.</summary>
    public bool IsAnyForgotten => _forgetHalfLives.AsSpan().ContainsAnyExcept(0);

    /// <summary>Events encoded.</summary>
    public long Events { get; private set; }

    /// <summary>Events of which a category shares its slot with another value.</summary>
    public long CollidedEvents { get; private set; }

    /// <summary>Encodes an event. The result is valid until the next call.</summary>
    public VectorBuilder Encode(RecordBatch records, int record)
    {
        _vector.Clear();
        _histories.Open(records, record);
        for (int i = 0; i < _features.Length; i++)
        {
            _vector.Feature = i;
            _features[i].Encode(records, record, _vector);
        }
        _histories.Add(records, record);
        Events++;
        if (_vector.HasCollision) CollidedEvents++;
        return _vector;
    }

    /// <summary>The keys of the event encoded last that its label will be learned for, to be kept with the event. Always as many.</summary>
    public ReadOnlySpan<ulong> LabelKeys => _histories.LabelKeys;

    /// <summary>How the memory of histories is doing.</summary>
    public HistoryFigures HistoryFigures => _histories.Figures();

    /// <summary>Tells the histories the label of an event that was encoded before.</summary>
    /// <param name="labelKeys">Its <see cref="LabelKeys"/>.</param>
    /// <param name="timeMicroseconds">Its time.</param>
    /// <param name="label">0 or 1.</param>
    /// <param name="weight">Its importance; below 0 to take back a label that was wrong.</param>
    public void Learn(ReadOnlySpan<ulong> labelKeys, long timeMicroseconds, int label, double weight) =>
        _histories.Learn(labelKeys, timeMicroseconds, label, weight);

    /// <summary>Every slot that an event has used, with its name, dense slots first.</summary>
    public IEnumerable<(int Slot, string Name)> UsedSlots()
    {
        int dense = FirstDenseSlot;
        foreach (var feature in _features)
            for (int end = dense + feature.DenseSlots; dense < end; dense++)
                if (_ledger.IsUsed(dense)) yield return (dense, feature.NameOf(dense));
        for (int slot = 0; slot < FirstDenseSlot; slot++)
            if (_ledger.IsUsed(slot)) yield return (slot, _names.Of(slot));
    }

    /// <summary>Whether an event has used a slot.</summary>
    public bool IsUsed(int slot) => _ledger.IsUsed(slot);

    /// <summary>The name of a slot.</summary>
    public string NameOf(int slot) => slot < FirstDenseSlot ? _names.Of(slot) : _features[FeatureOfDense(slot)].NameOf(slot);

    /// <summary>The half-life, in microseconds, of the coefficient of a slot: that of the feature whose value took it first. 0 for never, and where none has.</summary>
    public long ForgetHalfLifeOf(int slot)
    {
        int feature = slot < FirstDenseSlot ? _ledger.OwnerOf(slot) : FeatureOfDense(slot);
        return feature < 0 ? 0 : _forgetHalfLives[feature];
    }

    /// <summary>What the features have learned about the scales of their values.</summary>
    public IEnumerable<FittedScale> Scales()
    {
        for (int i = 0; i < _features.Length; i++)
        {
            using var bytes = new MemoryStream();
            using (var writer = new BinaryWriter(bytes, Encoding.UTF8, leaveOpen: true)) _features[i].Save(writer);
            if (bytes.Length > 0) yield return new FittedScale(i, [.. bytes.ToArray()]);
        }
    }

    /// <summary>Takes up learned scales. Only before the first event.</summary>
    /// <exception cref="InvalidStateException">One does not belong to its feature.</exception>
    public void StartFrom(IEnumerable<FittedScale> scales)
    {
        foreach (var scale in scales)
        {
            if ((uint)scale.Feature >= (uint)_features.Length) throw new InvalidStateException($"the warm start has a scale of feature {scale.Feature}, which is not there");
            using var reader = new BinaryReader(new MemoryStream([.. scale.Learned]));
            try
            {
                _features[scale.Feature].Load(reader);
            }
            catch (EndOfStreamException)
            {
                throw new InvalidStateException($"the warm start's scale of feature {scale.Feature} is damaged");
            }
        }
    }

    /// <summary>Takes up what is remembered of keys, after <see cref="Load"/>.</summary>
    public void LoadHistories(StateBlocks state) => _histories.Load(state);

    public void Save(StateBlocks changes)
    {
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(Events);
        writer.Write(CollidedEvents);
        foreach (var feature in _features) feature.Save(writer);
        changes.Put(Part, 0, bytes.ToArray());
        _ledger.Save(changes);
        _names.Save(changes);
        _histories.Save(changes);
    }

    /// <summary>Takes up a saved state, but for the histories.</summary>
    public void Load(StateBlocks state)
    {
        byte[] bytes = state.Find(Part, 0) ?? throw new InvalidStateException($"the state has no {Part}");
        using var reader = new BinaryReader(new MemoryStream(bytes));
        Events = reader.ReadInt64();
        CollidedEvents = reader.ReadInt64();
        foreach (var feature in _features) feature.Load(reader);
        _ledger.Load(state);
        _names.Load(state);
    }

    private int FeatureOfDense(int slot)
    {
        int feature = 0;
        for (int end = FirstDenseSlot + _features[0].DenseSlots; slot >= end; end += _features[feature].DenseSlots) feature++;
        return feature;
    }

    private Feature Create(FeatureOptions options, RecordSchema schema, HashedSlots hashed, int firstSlot) => options switch
    {
        NumberFeature number => new NumberEncoding(number, schema.IndexOf(number.Field), firstSlot),
        TimeCycleFeature cycle => new TimeCycleEncoding(cycle, firstSlot),
        NumberCycleFeature cycle => new NumberCycleEncoding(cycle, schema.IndexOf(cycle.Field), firstSlot),
        HistoryFeature history => _histories.Create(history, firstSlot),
        BucketFeature bucket => new BucketEncoding(bucket, schema.IndexOf(bucket.Field), firstSlot),
        TextFeature text => new TextEncoding(text, schema.IndexOf(text.Field), hashed, _names, firstSlot),
        CategoryFeature category => new CategoryEncoding(category, [.. category.Fields.Select(schema.IndexOf)], hashed, _names),
        _ => throw new ArgumentException($"no encoding for {options.GetType().Name}", nameof(options)),
    };
}
