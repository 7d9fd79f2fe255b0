using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class ScoreFileTests : FileSinkContract
{
    private protected override IScoreSink Open(string path) => new ScoreFile(new FileOutputOptions(path), Schemas.Definition);

    [Fact]
    public void Write_Batch_OneLineAScore()
    {
        using var sink = Open();
        sink.Start(null);
        ScoredBatch.Create(1, 4).WriteTo(sink);

        Assert.Equal("scores", sink.Name);
        Assert.Equal(
            """
            {"id":"t-1","time":"2026-03-01T08:15:30Z","probability":0.5,"logOdds":-0,"decision":"pass","cutoff":0.5,"version":1,"reasons":[{"feature":"country","contribution":0.5}]}
            {"id":"t-3","time":"2026-03-01T08:15:30Z","probability":0.25,"logOdds":-1.0986122886681098,"decision":"pass","cutoff":0.5,"version":3,"reasons":[{"feature":"country","contribution":2.5}]}
            {"id":"t-4","time":"2026-03-01T08:15:30Z","probability":0.2,"logOdds":-1.3862943611198906,"decision":"pass","cutoff":0.5,"version":4,"reasons":[{"feature":"amount","contribution":3.5}]}

            """,
            File.ReadAllText(OutPath));
    }
}
