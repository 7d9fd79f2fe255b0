using System.Collections.Immutable;
using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>One record decoded on its own, and short ways to what was read from it.</summary>
internal sealed class DecodedText
{
    private readonly RecordBatch _batch;
    private readonly RecordSchema _schema;

    private DecodedText(RecordBatch batch, RecordSchema schema)
    {
        _batch = batch;
        _schema = schema;
    }

    public static RecordOptions Options { get; } = new()
    {
        LabelValues = ImmutableDictionary<string, int>.Empty.Add("1", 1).Add("0", 0).Add("stolen", 1).Add("paid", 0).Add("true", 1).Add("false", 0),
        MaximumDepth = 6,
        MaximumBytes = 4000,
    };

    /// <summary>A number, a category, both in one field, and two nested fields.</summary>
    public static RecordSchema Schema { get; } = SchemaOf(
        Options,
        new NumberFeature("amount", NumberScale.None),
        new CategoryFeature(["country"]),
        new NumberFeature("floor", NumberScale.None),
        new CategoryFeature(["floor"]),
        new NumberFeature("payment.fee", NumberScale.None),
        new CategoryFeature(["payment.card.kind"]));

    public DecodedRecord Record => _batch.Records[0];

    public RejectReason Reason => Record.Reason;

    public string? Detail => Record.Detail;

    public string Id => Encoding.UTF8.GetString(_batch.Id(0));

    public static RecordSchema SchemaOf(RecordOptions options, params FeatureOptions[] features) =>
        new(new EngineDefinition { Stream = "test", Record = options, Features = [.. features] });

    public static DecodedText Of(string record, RecordSchema? schema = null) => Of(Encoding.UTF8.GetBytes(record), schema);

    public static DecodedText Of(byte[] record, RecordSchema? schema = null)
    {
        schema ??= Schema;
        var batch = new RecordBatch(schema);
        batch.Add(record, 1);
        new RecordDecoder(schema).Decode(batch);
        return new DecodedText(batch, schema);
    }

    /// <summary>A record with an id and a time, and more members.</summary>
    public static DecodedText With(string members, RecordSchema? schema = null) =>
        Of("{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\"" + (members.Length == 0 ? "" : "," + members) + "}", schema);

    public FieldValue Field(string path) => _batch.Fields(0)[_schema.IndexOf(path)];

    public string Text(string path) => Encoding.UTF8.GetString(_batch.Bytes.Slice(Field(path).TextStart, Field(path).TextLength));
}
