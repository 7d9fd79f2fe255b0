using System.Text;
using CsCheck;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>The decoder against the plain reading of <see cref="JsonOracle"/>. Each run has one decoder, so that what it remembers is tested too.</summary>
public class RecordDecoderFuzzTests
{
    private static readonly RecordSchema Rfc3339 = DecodedText.Schema;
    private static readonly RecordSchema Seconds = With(TimeFormat.UnixSeconds);
    private static readonly RecordSchema Milliseconds = With(TimeFormat.UnixMilliseconds);

    [Fact]
    public void Decode_WellFormedRecords_AgreesWithOracle() =>
        RecordTexts.WellFormed.Array[1, 20].Check(1500, 1, records => Compare(records, Rfc3339));

    [Fact]
    public void Decode_MutatedRecords_AgreesWithOracle() =>
        RecordTexts.Mutated.Array[1, 20].Check(3000, 2, records => Compare(records, Rfc3339));

    [Fact]
    public void Decode_UnixTimes_AgreesWithOracle() =>
        Gen.Frequency((2, RecordTexts.WellFormed), (1, RecordTexts.Mutated)).Array[1, 20].Check(700, 3, records =>
        {
            Compare(records, Seconds);
            Compare(records, Milliseconds);
        });

    [Fact]
    public void Decode_RandomBytes_AgreesWithOracle() =>
        Gen.Byte.Array[0, 60].Array[1, 20].Check(500, 4, records => Compare(records, Rfc3339));

    [Fact]
    public void WellFormed_Samples_HaveAllOutcomes()
    {
        var outcomes = new HashSet<string>();
        RecordTexts.WellFormed.Check(8_000, 5, record =>
        {
            var decoded = DecodedText.Of(record);
            outcomes.Add($"{decoded.Record.Kind} {decoded.Reason}");
        });
        Assert.Superset(new HashSet<string>
        {
            "Event None", "LabelledEvent None", "Label None", "Reject NotUtf8", "Reject DuplicateKey", "Reject IdMissing", "Reject IdUnreadable",
            "Reject TimeMissing", "Reject TimeUnreadable", "Reject LabelNotBinary", "Reject WeightOutOfRange", "Reject NumberUnreadable",
            "Reject NumberOutOfRange", "Reject CategoryUnreadable",
        }, outcomes);
    }

    private static RecordSchema With(TimeFormat format) => DecodedText.SchemaOf(
        DecodedText.Options with { TimeFormat = format },
        new NumberFeature("amount", NumberScale.None),
        new CategoryFeature(["time", "payment.fee"]));

    private static void Compare(byte[][] records, RecordSchema schema)
    {
        var oracle = new JsonOracle(schema);
        var batch = new RecordBatch(schema);
        for (int i = 0; i < records.Length; i++) batch.Add(records[i], i);
        new RecordDecoder(schema).Decode(batch);
        for (int i = 0; i < records.Length; i++)
        {
            string text = Encoding.UTF8.GetString(records[i]);
            try
            {
                Compare(oracle.Read(records[i]), batch, i, schema);
            }
            catch (Exception exception)
            {
                throw new InvalidOperationException($"Record {i}: {text}", exception);
            }
        }
    }

    private static void Compare(OracleRecord expected, RecordBatch batch, int index, RecordSchema schema)
    {
        var record = batch.Records[index];
        Assert.Equal(index, record.Position);
        Assert.Equal((expected.Kind, expected.Reason), (record.Kind, record.Reason));
        if (expected.Kind == RecordKind.Reject)
        {
            Assert.False(string.IsNullOrEmpty(record.Detail));
            return;
        }
        Assert.Equal(expected.Id, Encoding.UTF8.GetString(batch.Id(index)));
        Assert.Equal(FieldHash.Of(Encoding.UTF8.GetBytes(expected.Id)), record.IdHash);
        Assert.Equal(expected.TimeMicroseconds, record.TimeMicroseconds);
        if (expected.Kind != RecordKind.Event) Assert.Equal(expected.Label, record.Label);
        Assert.Equal(expected.Weight, record.Weight);
        var fields = batch.Fields(index);
        for (int i = 0; i < fields.Length; i++)
        {
            Assert.Equal(expected.Fields[i].IsPresent, fields[i].IsPresent);
            if (expected.Fields[i].Number is { } number) Assert.Equal(BitConverter.DoubleToInt64Bits(number), BitConverter.DoubleToInt64Bits(fields[i].Number));
            if (expected.Fields[i].Text is not { } text) continue;
            byte[] utf8 = Encoding.UTF8.GetBytes(text);
            Assert.Equal(utf8, batch.Bytes.Slice(fields[i].TextStart, fields[i].TextLength).ToArray());
            Assert.Equal(FieldHash.Of(utf8), fields[i].Hash);
        }
        Assert.Equal(schema.Fields.Length, fields.Length);
    }
}
