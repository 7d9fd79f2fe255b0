using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

public class DuplicateKeyTests
{
    [Theory]
    [InlineData("\"x\":1,\"x\":2")]
    [InlineData("\"x\":1,\"x\":1")]
    [InlineData("\"x\":null,\"y\":0,\"x\":null")]
    [InlineData("\"id\":\"b\"")]
    [InlineData("\"time\":null")]
    [InlineData("\"amount\":1,\"amount\":1")]
    [InlineData("\"amount\":null,\"country\":\"a\",\"amount\":1")]
    [InlineData("\"\":1,\"\":2")]
    [InlineData("\"\\u0069d\":\"b\"")]
    [InlineData("\"\\u0078\":1,\"x\":2")]
    [InlineData("\"x\":1,\"\\u0078\":2")]
    [InlineData("\"\\u0078\":1,\"\\u0078\":2")]
    [InlineData("\"\\n\":1,\"\\u000a\":2")]
    [InlineData("\"\\u00e9\":1,\"é\":2")]
    [InlineData("\"\\ud83d\\ude00\":1,\"😀\":2")]
    [InlineData("\"\\\"\":1,\"\\u0022\":2")]
    [InlineData("\"\\/\":1,\"/\":2")]
    [InlineData("\"\\u0000\":1,\"\\u0000\":2")]
    [InlineData("\"x\" :1,\"x\"\t:2")]
    [InlineData("\"o\":{\"x\":1,\"x\":2}")]
    [InlineData("\"o\":{\"x\":1,\"y\":{},\"x\":2}")]
    [InlineData("\"o\":[{\"x\":1},{\"x\":1,\"x\":2}]")]
    [InlineData("\"o\":[[{\"a\":{\"x\":1,\"\\u0078\":2}}]]")]
    [InlineData("\"o\":{\"x\":{\"x\":1},\"x\":2}")]
    [InlineData("\"o\":{\"\\u0078\":1,\"\\u0079\":2,\"z\":3,\"y\":4}")]
    [InlineData("\"payment\":{\"fee\":1,\"fee\":2}")]
    [InlineData("\"payment\":{\"note\":1,\"note\":2}")]
    [InlineData("\"payment\":{\"note\":{\"x\":1,\"x\":2}}")]
    [InlineData("\"payment\":{\"card\":{\"kind\":1,\"kind\":2}}")]
    [InlineData("\"payment\":{\"fee\":1},\"payment\":{}")]
    [InlineData("\"payment\":{\"fee\":1},\"payment.fee\":1")]
    [InlineData("\"payment.fee\":1,\"payment\":{\"fee\":null}")]
    [InlineData("\"payment.card.kind\":1,\"payment\":{\"card\":{\"kind\":1}}")]
    [InlineData("\"country\":{\"x\":1,\"x\":2}")]
    [InlineData("\"label\":[{\"x\":1,\"x\":2}]")]
    public void Decode_KeyTwice_IsDuplicateKey(string members)
    {
        var decoded = DecodedText.With(members);
        Assert.Equal(RejectReason.DuplicateKey, decoded.Reason);
        Assert.Contains("twice", decoded.Detail);
    }

    [Theory]
    [InlineData("\"x\":1,\"X\":2")]
    [InlineData("\"x\":1,\"x \":2,\" x\":3,\"xx\":4")]
    [InlineData("\"e\\u0301\":1,\"é\":2")]
    [InlineData("\"o\":{\"x\":1},\"x\":2,\"p\":{\"x\":3}")]
    [InlineData("\"o\":[{\"x\":1},{\"x\":2}]")]
    [InlineData("\"o\":{\"x\":{\"x\":{\"x\":1}}}")]
    [InlineData("\"x\":\"x\",\"y\":\"x\"")]
    [InlineData("\"payment\":{\"fee\":1,\"id\":2,\"payment\":3},\"fee\":4")]
    [InlineData("\"payment\":{\"payment.fee\":1,\"fee\":2}")]
    [InlineData("\"\\u0000\":1,\"\":2,\"\\u0000\\u0000\":3")]
    [InlineData("\"\\\\\":1,\"\\\\\\\\\":2")]
    public void Decode_KeysThatOnlyLookAlike_IsAccepted(string members) => Assert.Equal(RejectReason.None, DecodedText.With(members).Reason);

    [Theory]
    [InlineData(2)]
    [InlineData(23)]
    [InlineData(24)]
    [InlineData(25)]
    [InlineData(26)]
    [InlineData(300)]
    [InlineData(5000)]
    public void Decode_ManyKeys_FindsTheOneThatStandsTwice(int count)
    {
        var schema = DecodedText.SchemaOf(DecodedText.Options with { MaximumBytes = 1 << 20 });
        // The first and last eight bytes of all names are the same, so that fingerprints say nothing.
        string[] names = [.. Enumerable.Range(0, count).Select(i => $"same-head-{i}-same-tail")];
        foreach (string form in (string[])["{0}", "\"o\":{{{0}}}", "\"o\":[{{{0}}}]"])
        {
            string Record(IEnumerable<string> keys) => string.Format(null, CompositeFormat.Parse(form), string.Join(',', keys.Select(key => $"\"{key}\":0")));
            Assert.Equal(RejectReason.None, DecodedText.With(Record(names), schema).Reason);
            foreach (int twice in (int[])[0, count / 2, count - 1])
            {
                Assert.Equal(RejectReason.DuplicateKey, DecodedText.With(Record([.. names, names[twice]]), schema).Reason);
                Assert.Equal(RejectReason.DuplicateKey, DecodedText.With(Record([names[twice].Replace("-", "\\u002d"), .. names]), schema).Reason);
            }
        }
    }

    [Fact]
    public void Decode_KeysOfManyRecords_AreLearnedWithoutMixingRecords()
    {
        var batch = new RecordBatch(DecodedText.Schema);
        for (int i = 0; i < 600; i++)
        {
            // Far more names than are learned, each of them in three records, the last of which has it twice.
            string name = $"key-{i / 3}-{i / 150}";
            string more = i % 3 == 2 ? $",\"{name}\":2" : "";
            batch.Add(Encoding.UTF8.GetBytes($"{{\"id\":\"a\",\"{name}\":1,\"time\":\"2026-03-01T08:15:30Z\",\"n{i % 40}\":[],\"long-{i}\":1{more}}}"), i);
        }
        new RecordDecoder(DecodedText.Schema).Decode(batch);
        for (int i = 0; i < batch.Count; i++)
            Assert.Equal(i % 3 == 2 ? RejectReason.DuplicateKey : RejectReason.None, batch.Records[i].Reason);
    }
}
