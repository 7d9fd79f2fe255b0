using System.Text;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class ZstandardSourceTests : FileSourceContract
{
    private protected override string LastFile => Folder["quay.jsonl.zst"];

    private protected override List<TakenRecord> Arrange(int records)
    {
        var taken = Enumerable.Range(1, records).Select(i => new TakenRecord(Record(i), i)).ToList();
        Packing.Pack(LastFile, Encoding.UTF8.GetBytes(string.Join("\n", taken.Select(record => record.Text))));
        return taken;
    }

    private protected override void Shorten() => Packing.Pack(LastFile, Packing.Unpack(LastFile)[..^1]);

    private protected override void Alter()
    {
        byte[] content = Packing.Unpack(LastFile);
        content[^100] = (byte)'#';
        Packing.Pack(LastFile, content);
    }

    private protected override IRecordSource Open() =>
        RecordingSource.Open(new FileSourceOptions(LastFile, RecordingFormats.OfName(LastFile)!.Value), 1000, TimeProvider.System);

    [Fact]
    public async Task Fill_FileCutWithinItsBytes_Throws()
    {
        Arrange(4000);
        byte[] packed = File.ReadAllBytes(LastFile);
        File.WriteAllBytes(LastFile, packed[..(packed.Length * 2 / 3)]);
        using var source = Open();

        var error = await Assert.ThrowsAsync<PipelineException>(() => TakenRecord.TakeAllAsync(source));
        Assert.StartsWith($"{LastFile} cannot be read: ", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Fill_NotPackedAtAll_Throws()
    {
        Folder.Write("quay.jsonl.zst", string.Join("\n", Enumerable.Range(1, 100).Select(Record)));
        using var source = Open();

        await Assert.ThrowsAsync<PipelineException>(() => TakenRecord.TakeAllAsync(source));
    }
}
