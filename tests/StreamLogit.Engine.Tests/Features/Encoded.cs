using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Features;

/// <summary>Encodes records one after the other.</summary>
internal sealed class Encoded
{
    private readonly RecordSchema _schema;
    private readonly RecordDecoder _decoder;

    public Encoded(params FeatureOptions[] features)
        : this(0, features)
    {
    }

    public Encoded(ulong seed, params FeatureOptions[] features)
        : this(Definitions.Of(features) with { Learning = Definitions.Of().Learning with { HashSeed = seed } })
    {
    }

    public Encoded(EngineDefinition definition)
    {
        _schema = new RecordSchema(definition);
        _decoder = new RecordDecoder(_schema);
        Encoder = new FeatureEncoder(definition, _schema);
    }

    public FeatureEncoder Encoder { get; }

    public (int[] Slots, double[] Values) Encode(string record)
    {
        var batch = new RecordBatch(_schema);
        batch.Add(Encoding.UTF8.GetBytes(record), 1);
        _decoder.Decode(batch);
        Assert.Equal(RecordKind.Event, batch.Records[0].Kind);
        var vector = Encoder.Encode(batch, 0).Vector;
        return (vector.Slots.ToArray(), vector.Values.ToArray());
    }
}
