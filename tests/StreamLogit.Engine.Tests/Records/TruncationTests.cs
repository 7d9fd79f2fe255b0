using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

public class TruncationTests
{
    private const string Record =
        " {\"id\":\"t-\\u0038\\ud83d\\ude001\",\"time\":\"2026-03-01T08:15:30.120Z\",\"amount\":-41.25e-1,\"country\":\"Köln 😀\",\"floor\":10," +
        "\"payment\":{\"fee\":0.5,\"card\":{\"kind\":true}},\"x\":{\"a\":[1,{\"b\":null}],\"\\u0063\":false},\"label\":\"stolen\",\"weight\":2.5 }";

    [Fact]
    public void Decode_EveryPrefix_IsRejected()
    {
        byte[] whole = Encoding.UTF8.GetBytes(Record);
        Assert.Equal(RejectReason.None, DecodedText.Of(whole).Reason);
        // Once alone and once in a batch whose other records go on where the prefix ends.
        var batch = new RecordBatch(DecodedText.Schema);
        for (int length = 0; length < whole.Length; length++)
        {
            bool isCutCharacter = (whole[length] & 0xC0) == 0x80;
            Assert.Equal(isCutCharacter ? RejectReason.NotUtf8 : RejectReason.NotJson, DecodedText.Of(whole[..length]).Reason);
            batch.Add(whole.AsSpan(0, length), length);
            batch.Add(whole.AsSpan(length), length);
        }
        new RecordDecoder(DecodedText.Schema).Decode(batch);
        Assert.All(batch.Records.ToArray().Where((_, i) => i % 2 == 0), record => Assert.Contains(record.Reason, (RejectReason[])[RejectReason.NotJson, RejectReason.NotUtf8]));
    }

    [Fact]
    public void Decode_EverySuffix_IsRejected()
    {
        byte[] whole = Encoding.UTF8.GetBytes(Record);
        // Without the blank it starts with it is whole.
        for (int start = 2; start < whole.Length; start++) Assert.NotEqual(RejectReason.None, DecodedText.Of(whole[start..]).Reason);
    }

    [Fact]
    public void Decode_EveryByteReplacedByNul_IsRejected()
    {
        byte[] whole = Encoding.UTF8.GetBytes(Record);
        for (int place = 0; place < whole.Length; place++)
        {
            byte[] broken = [.. whole];
            broken[place] = 0;
            Assert.Contains(DecodedText.Of(broken).Reason, (RejectReason[])[RejectReason.NotJson, RejectReason.NotUtf8]);
        }
    }
}
