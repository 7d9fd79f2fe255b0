using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>Batches that are used again, grow while they are decoded, or are cut in another way.</summary>
public class RecordDecoderBatchTests
{
    private static readonly string[] Lines =
    [
        "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"amount\":1,\"country\":\"x\",\"floor\":1,\"payment\":{\"fee\":1,\"card\":{\"kind\":\"k\"}},\"label\":1,\"weight\":2}",
        "{\"id\":\"b\\u0062\",\"time\":\"2026-03-01T08:15:31Z\",\"c\\u006funtry\":\"\\u00e9\"}",
        "{\"id\":\"c\",\"label\":0,\"time\":\"2026-03-09T10:00:00Z\"}",
        "{\"id\":\"d\",\"time\":\"2026-03-01T08:15:32Z\",\"other\":{\"a\":[1,2,{\"b\":\"c\"}]},\"amount\":3.25}",
        "{\"id\":\"e\",\"time\":\"2026-03-01T08:15:33Z\",\"amount\":\"wrong\"}",
        "{broken",
        "{ \"time\" : \"2026-03-01T08:15:34+01:00\" , \"id\" : 7 , \"payment\" : { \"fee\" : 1e-3 } }",
    ];

    [Fact]
    public void Decode_ReusedBatch_KeepsNothingOfTheLastRecords()
    {
        var decoder = new RecordDecoder(DecodedText.Schema);
        var batch = new RecordBatch(DecodedText.Schema);
        batch.Add(Encoding.UTF8.GetBytes(Lines[0]), 1);
        decoder.Decode(batch);
        batch.Clear();
        batch.Add("{\"id\":\"z\",\"time\":\"2026-03-01T08:15:30Z\"}"u8, 2);
        decoder.Decode(batch);
        var record = batch.Records[0];
        Assert.Equal((RecordKind.Event, 0, true), (record.Kind, record.Label, double.IsNaN(record.Weight)));
        Assert.All(batch.Fields(0).ToArray(), field => Assert.Equal(default, field));
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(1000)]
    public void Decode_AnyBatchSize_GivesTheSame(int size)
    {
        var decoder = new RecordDecoder(DecodedText.Schema);
        var expected = Enumerable.Range(0, 70).Select(i => Describe(Alone(Lines[i * 5 % 7]), 0));
        var actual = Enumerable.Range(0, 70).Chunk(size).SelectMany(chunk =>
        {
            var batch = new RecordBatch(DecodedText.Schema);
            foreach (int i in chunk) batch.Add(Encoding.UTF8.GetBytes(Lines[i * 5 % 7]), i);
            decoder.Decode(batch);
            return chunk.Select((_, i) => Describe(batch, i)).ToArray();
        });
        Assert.Equal(expected, actual);
    }

    [Fact]
    public void Decode_TextsThatMakeTheBatchGrow_AreKept()
    {
        var schema = DecodedText.SchemaOf(DecodedText.Options with { MaximumBytes = 1 << 20 }, new Definition.CategoryFeature(["country"]));
        var batch = new RecordBatch(schema);
        for (int i = 0; i < 20; i++)
        {
            string text = new((char)('a' + i), 20_000);
            batch.Add(Encoding.UTF8.GetBytes($"{{\"country\":\"\\u0041{text}\",\"id\":\"{i}\\n{text}\",\"time\":\"2026-03-01T08:15:30Z\"}}"), i);
        }
        new RecordDecoder(schema).Decode(batch);
        for (int i = 0; i < 20; i++)
        {
            string text = new((char)('a' + i), 20_000);
            Assert.Equal($"{i}\n{text}", Encoding.UTF8.GetString(batch.Id(i)));
            Assert.Equal("A" + text, Encoding.UTF8.GetString(batch.Bytes.Slice(batch.Fields(i)[0].TextStart, batch.Fields(i)[0].TextLength)));
        }
    }

    [Fact]
    public void Decode_EmptyBatch_DoesNothing()
    {
        var batch = new RecordBatch(DecodedText.Schema);
        new RecordDecoder(DecodedText.Schema).Decode(batch);
        Assert.Equal(0, batch.Count);
    }

    private static RecordBatch Alone(string line)
    {
        var batch = new RecordBatch(DecodedText.Schema);
        batch.Add(Encoding.UTF8.GetBytes(line), 0);
        new RecordDecoder(DecodedText.Schema).Decode(batch);
        return batch;
    }

    private static string Describe(RecordBatch batch, int index)
    {
        var record = batch.Records[index];
        var text = new StringBuilder($"{record.Kind} {record.Reason} {record.Detail}");
        if (record.Kind == RecordKind.Reject) return text.ToString();
        text.Append($" {Encoding.UTF8.GetString(batch.Id(index))} {record.TimeMicroseconds} {record.Label} {record.Weight}");
        foreach (var field in batch.Fields(index))
            text.Append($" {field.IsPresent} {field.Number} {Encoding.UTF8.GetString(batch.Bytes.Slice(field.TextStart, field.TextLength))}");
        return text.ToString();
    }
}
