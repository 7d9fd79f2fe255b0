using System.Buffers;
using System.Text;
using System.Text.Json;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Tests.Formats;

public sealed class RejectJsonTests
{
    private static JsonElement Write(byte[] record, string? detail)
    {
        var batch = Schemas.NewBatch();
        batch.Origin = "a \"file\".jsonl";
        batch.Add(record, 1234);
        batch.Reject(0, RejectReason.LabelNotBinary, detail);
        var buffer = new ArrayBufferWriter<byte>();
        RejectJson.Write(batch, 0, buffer);
        using var json = JsonDocument.Parse(buffer.WrittenMemory);
        return json.RootElement.Clone();
    }

    [Fact]
    public void Write_Reject_HasAllParts()
    {
        var reject = Write(Encoding.UTF8.GetBytes("{\"é\": \"\\n\"\t}"), "the label is 'é'");

        Assert.Equal(["position", "reason", "detail", "record"], reject.EnumerateObject().Select(p => p.Name));
        Assert.Equal("a \"file\".jsonl:1234", reject.GetProperty("position").GetString());
        Assert.Equal("label-not-binary", reject.GetProperty("reason").GetString());
        Assert.Equal("the label is 'é'", reject.GetProperty("detail").GetString());
        Assert.Equal("{\"é\": \"\\n\"\t}", reject.GetProperty("record").GetString());
    }

    [Fact]
    public void Write_NoDetail_IsNull() => Assert.Equal(JsonValueKind.Null, Write([], null).GetProperty("detail").ValueKind);

    [Fact]
    public void Write_NotUtf8_HasReplacements() => Assert.Equal("a\uFFFDb\0", Write([(byte)'a', 0xff, (byte)'b', 0], "").GetProperty("record").GetString());

    [Fact]
    public void Write_LongRecord_IsWhole() => Assert.Equal(1 << 20, Write(new byte[1 << 20], null).GetProperty("record").GetString()!.Length);
}
