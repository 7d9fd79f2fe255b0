using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Features.Histories;

/// <summary>Encodes histories one event after the other, and remembers the keys that labels are for.</summary>
internal sealed class HistoryRun
{
    private readonly EngineDefinition _definition;
    private readonly RecordSchema _schema;
    private readonly RecordDecoder _decoder;
    private readonly RecordBatch _batch;
    private readonly StateBlocks _saved = new();
    private readonly DictionaryArchive _savedArchive = new();
    private DictionaryArchive? _archive;

    public HistoryRun(IEnumerable<HistoryFeature> histories, long? memoryBytes = null)
    {
        _definition = Definitions.Of([.. histories]) with { Record = new RecordOptions { TimeFormat = TimeFormat.UnixMilliseconds } };
        if (memoryBytes is not null)
        {
            _definition = _definition with { Histories = new HistoryOptions { MemoryBytes = memoryBytes.Value } };
            _archive = new DictionaryArchive(_savedArchive);
        }
        _schema = new RecordSchema(_definition);
        _decoder = new RecordDecoder(_schema);
        _batch = new RecordBatch(_schema);
        Encoder = new FeatureEncoder(_definition, _schema, _archive);
    }

    public FeatureEncoder Encoder { get; private set; }

    /// <summary>The keys for the label of the last event.</summary>
    public ulong[] LabelKeys { get; private set; } = [];

    /// <summary>The figures of the last event, one a history.</summary>
    public double[] Figures { get; private set; } = [];

    /// <summary>The value of every history, NaN where it switched on the coefficient for a missing one.</summary>
    public double[] Encode(string record)
    {
        _batch.Clear();
        _batch.Add(Encoding.UTF8.GetBytes(record), 1);
        _decoder.Decode(_batch);
        Assert.Equal(RecordKind.Event, _batch.Records[0].Kind);
        var vector = Encoder.Encode(_batch, 0);
        LabelKeys = Encoder.LabelKeys.ToArray();
        Figures = vector.Figures.ToArray();
        var values = new double[_definition.Features.Length];
        for (int i = 0; i < vector.Count; i++)
        {
            int slot = vector.Vector.Slots[i] - Encoder.FirstDenseSlot;
            values[slot / 2] = slot % 2 == 0 ? vector.Vector.Values[i] : double.NaN;
        }
        return values;
    }

    public void Learn(ulong[] labelKeys, long timeMicroseconds, int label, double weight = 1) =>
        Encoder.Learn(labelKeys, timeMicroseconds, label, weight);

    public void Save()
    {
        Encoder.Save(_saved);
        _archive?.MoveTo(_savedArchive);
    }

    /// <summary>Goes on from the last save with an encoder that has seen nothing, as after a crash.</summary>
    public void Restart(long? memoryBytes = null)
    {
        if (_archive is not null) _archive = new DictionaryArchive(_savedArchive);
        var definition = memoryBytes is null ? _definition : _definition with { Histories = new HistoryOptions { MemoryBytes = memoryBytes.Value } };
        Encoder = new FeatureEncoder(definition, _schema, _archive);
        Encoder.Load(_saved);
        Encoder.LoadHistories(_saved);
    }
}
