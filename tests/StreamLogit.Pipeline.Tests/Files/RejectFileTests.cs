using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class RejectFileTests : FileSinkContract
{
    private protected override IScoreSink Open(string path) => new RejectFile(new FileOutputOptions(path));

    [Fact]
    public void Write_Batch_OneLineAReject()
    {
        using var sink = Open();
        sink.Start(null);
        var batch = ScoredBatch.Create(1, 5);
        string detail = batch.Records.Records[1].Detail!;
        batch.WriteTo(sink);

        Assert.Equal("rejects", sink.Name);
        Assert.Equal(
            $$"""
            {"position":"quay.jsonl:2","reason":"not-json","detail":"{{detail}}","record":"{\"id\":"}
            {"position":"quay.jsonl:5","reason":"not-json","detail":"{{detail}}","record":"{\"id\":"}

            """,
            File.ReadAllText(OutPath));
    }
}
