using System.Collections.Immutable;
using System.Text;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay;
using StreamLogit.Pipeline.Tests.Files;
using StreamLogit.Pipeline.Tests.Replay;

namespace StreamLogit.Pipeline.Tests.Stages;

/// <summary>A replay of what a worker recorded gives the scores of the worker.</summary>
public sealed class RecordedRunTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public RecordedRunTests() => _folder.Write("quay.jsonl", LoopStream.Create(3000));

    public void Dispose() => _folder.Dispose();

    private StreamDefinition Definition(long maximumBytes) =>
        LoopStream.Definition(_folder) with { Recording = new RecordingOptions(_folder["recorded"], maximumBytes) };

    private async Task<string> ReplayAsync()
    {
        var recordings = RecordingNames.Find(new FileSourceOptions(_folder["recorded"], RecordingFormat.ByName));
        using var replay = new ReplayRun(LoopStream.Engine, recordings, new LoopOptions(), TimeProvider.System);
        return (await replay.RunAsync(TestContext.Current.CancellationToken)).ScoreHash;
    }

    private string[] RecordedLines() =>
        [.. Directory.EnumerateFiles(_folder["recorded"]).Order(StringComparer.Ordinal)
            .SelectMany(path => Encoding.Latin1.GetString(Packing.Unpack(path)).Split('\n')[..^1])];

    [Fact]
    public async Task Replay_OfAnUndisturbedRun_GivesItsScores()
    {
        using (var live = LoopStream.Open(Definition(1 << 20), new LoopOptions { BatchSize = 77 }, TimeProvider.System))
            await live.RunAsync(TestContext.Current.CancellationToken);

        Assert.Equal(ScoreFileHash.Of(_folder["scores.jsonl"]), await ReplayAsync());
        Assert.Equal(3000, RecordedLines().Length);
    }

    [Theory]
    [InlineData(1 << 20, 5)]
    [InlineData(2000, 6)]
    public async Task Replay_OfARunThatDiedAgainAndAgain_GivesItsScores(long maximumBytes, int seed)
    {
        var random = new Random(seed);
        int deaths = 0;
        while (await DiesAsync(Definition(maximumBytes), random.Next(1, 100), new Death(random.Next(1, 60)))) deaths++;

        Assert.True(deaths >= 5);
        Assert.Equal(ScoreFileHash.Of(_folder["scores.jsonl"]), await ReplayAsync());
        // Whole lines are what came; of those that are too long the beginning is there.
        string[] lines = Encoding.Latin1.GetString(File.ReadAllBytes(_folder["quay.jsonl"])).Split('\n')[..^1];
        Assert.Equal(lines.Select(line => line[..Math.Min(line.Length, LoopStream.MaximumBytes)]), RecordedLines());
        Assert.Equal(maximumBytes > 2000, Directory.EnumerateFiles(_folder["recorded"]).Count() == 1);
    }

    private CopyRun Copy()
    {
        var definition = LoopStream.Definition(_folder);
        var folder = new RecordingFolder(new RecordingOptions(_folder["recorded"]));
        return new CopyRun(definition, StreamEnds.OpenSource(definition, TimeProvider.System), folder, null, TimeProvider.System);
    }

    private static async Task<bool> DiesAsync(StreamDefinition definition, int batchSize, Death death)
    {
        var source = new DyingSource(FileSource.Open((FileSourceOptions)definition.Source!, LoopStream.MaximumBytes, TimeProvider.System), death);
        ImmutableArray<IScoreSink> sinks =
        [
            new DyingSink(new ScoreFile((FileOutputOptions)definition.Scores!, definition.Engine), death),
            new DyingSink(new RecordingFolder(definition.Recording!), death),
        ];
        try
        {
            using var run = new StreamRun(definition, new StreamEnds(source, sinks), new LoopOptions { BatchSize = batchSize }, new JumpingTime()) { BeforeCommit = death.Step };
            await run.RunAsync(TestContext.Current.CancellationToken);
            return false;
        }
        catch (DeathException)
        {
            return true;
        }
    }

    [Fact]
    public async Task Record_AStream_GivesItsRecords()
    {
        using (var run = Copy())
            Assert.Equal(3000, await run.RunAsync(TestContext.Current.CancellationToken));
        using (var live = LoopStream.Open(LoopStream.Definition(_folder), new LoopOptions(), TimeProvider.System))
            await live.RunAsync(TestContext.Current.CancellationToken);

        Assert.Equal(ScoreFileHash.Of(_folder["scores.jsonl"]), await ReplayAsync());
        Assert.Throws<PipelineException>(() => Copy());
    }
}
