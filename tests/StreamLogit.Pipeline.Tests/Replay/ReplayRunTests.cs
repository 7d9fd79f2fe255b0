using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay;

namespace StreamLogit.Pipeline.Tests.Replay;

public sealed class ReplayRunTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private async Task<ReplayResult> ReplayAsync(LoopOptions options, params string[] names)
    {
        using var replay = new ReplayRun(
            LoopStream.Engine, [.. names.Select(name => new FileSourceOptions(_folder[name], RecordingFormat.JsonLines))], options, TimeProvider.System);
        return await replay.RunAsync(TestContext.Current.CancellationToken);
    }

    [Fact]
    public async Task Run_OtherBatchSizes_GivesTheSameHashHealthAndModel()
    {
        _folder.Write("quay.jsonl", LoopStream.Create(20_000));
        var one = await ReplayAsync(new LoopOptions { BatchSize = 1 }, "quay.jsonl");
        foreach (int batchSize in (int[])[7, 4096])
        {
            var other = await ReplayAsync(new LoopOptions { BatchSize = batchSize }, "quay.jsonl");

            Assert.Equal(one.ScoreHash, other.ScoreHash);
            Assert.Equal(SnapshotText.Of(one.Health), SnapshotText.Of(other.Health));
            Assert.Equal(SnapshotText.Of(one.Model), SnapshotText.Of(other.Model));
        }
    }

    [Fact]
    public async Task Run_SeveralRecordings_GivesWhatOneGives()
    {
        byte[] all = LoopStream.Create(3000);
        int cut = all.AsSpan(0, all.Length / 3).LastIndexOf((byte)'\n') + 1;
        _folder.Write("quay.jsonl", all);
        _folder.Write("1.jsonl", all[..cut]);
        _folder.Write("2.jsonl", all[cut..]);

        var whole = await ReplayAsync(new LoopOptions(), "quay.jsonl");
        var parts = await ReplayAsync(new LoopOptions(), "1.jsonl", "2.jsonl");

        Assert.Equal(whole.ScoreHash, parts.ScoreHash);
        Assert.Equal(SnapshotText.Of(whole.Health), SnapshotText.Of(parts.Health));
    }

    [Fact]
    public async Task Run_SameRecordsAsALiveRun_GivesTheSameScores()
    {
        _folder.Write("quay.jsonl", LoopStream.Create(5000));
        var replay = await ReplayAsync(new LoopOptions(), "quay.jsonl");
        using (var live = LoopStream.Open(LoopStream.Definition(_folder), new LoopOptions { BatchSize = 77 }, TimeProvider.System))
            await live.RunAsync(TestContext.Current.CancellationToken);

        Assert.Equal(replay.ScoreHash, ScoreFileHash.Of(_folder["scores.jsonl"]));
    }

    [Theory]
    [InlineData(RecordingFormat.JsonLines)]
    [InlineData(RecordingFormat.Csv)]
    public async Task Run_Noise_RejectsEveryRecord(RecordingFormat format)
    {
        byte[] noise = new byte[1_000_000];
        new Random(3).NextBytes(noise);
        string path = _folder.Write("noise", [.. "id,time\n"u8, .. noise]);
        using var replay = new ReplayRun(LoopStream.Engine, [new FileSourceOptions(path, format)], new LoopOptions(), TimeProvider.System);
        var result = await replay.RunAsync(TestContext.Current.CancellationToken);

        Assert.True(result.Health.Records > 3000);
        Assert.Equal(result.Health.Records, result.Health.Rejected);
        Assert.Equal(replay.Progress.Source.TotalBytes, replay.Progress.Source.Bytes);
    }

    [Fact]
    public async Task Run_Stopped_GivesWhatWasReplayed()
    {
        _folder.Write("quay.jsonl", LoopStream.Create(10));
        using var replay = new ReplayRun(
            LoopStream.Engine, [new FileSourceOptions(_folder["quay.jsonl"], RecordingFormat.JsonLines)], new LoopOptions(), TimeProvider.System);

        var result = await replay.RunAsync(new CancellationToken(canceled: true));

        Assert.False(result.IsComplete);
        Assert.Equal(0, result.Health.Records);
    }

    [Fact]
    public async Task Progress_AtTheEnd_IsAll()
    {
        string path = _folder.Write("quay.jsonl", LoopStream.Create(500));
        using var replay = new ReplayRun(
            LoopStream.Engine, [new FileSourceOptions(path, RecordingFormat.JsonLines)], new LoopOptions(), TimeProvider.System);
        await replay.RunAsync(TestContext.Current.CancellationToken);

        long bytes = new FileInfo(path).Length;
        Assert.Equal(new LoopProgress(500, new SourceProgress(bytes, bytes), 0), replay.Progress);
    }
}
