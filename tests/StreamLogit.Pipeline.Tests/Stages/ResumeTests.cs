using System.Collections.Immutable;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Stages;

public sealed class ResumeTests : IDisposable
{
    private const int Lines = 2000;

    private readonly TemporaryFolder _undisturbed = new();
    private readonly TemporaryFolder _folder = new();
    private StreamRun? _undisturbedRun;

    public ResumeTests()
    {
        _undisturbed.Write("quay.jsonl", LoopStream.Create(Lines));
        _folder.Write("quay.jsonl", LoopStream.Create(Lines));
    }

    public void Dispose()
    {
        _undisturbedRun?.Dispose();
        _undisturbed.Dispose();
        _folder.Dispose();
    }

    private static async Task<StreamRun> RunAsync(StreamDefinition definition, int batchSize = 64, Death? death = null)
    {
        death ??= new Death(0);
        var file = (FileSourceOptions)definition.Source!;
        var source = new DyingSource(FileSource.Open(file, LoopStream.MaximumBytes, TimeProvider.System), death);
        ImmutableArray<IScoreSink> sinks =
        [
            new DyingSink(new ScoreFile((FileOutputOptions)definition.Scores!, definition.Engine), death),
            new DyingSink(new RejectFile((FileOutputOptions)definition.Rejects!), death),
        ];
        // Closed at the end, it still tells its health and its model.
        using var run = new StreamRun(definition, new StreamEnds(source, sinks), new LoopOptions { BatchSize = batchSize }, new JumpingTime())
        {
            BeforeCommit = death.Step,
        };
        await run.RunAsync(TestContext.Current.CancellationToken);
        return run;
    }

    private async Task AssertSameAsUndisturbedAsync(StreamRun run)
    {
        var undisturbed = _undisturbedRun ??= await RunAsync(LoopStream.Definition(_undisturbed));
        foreach (string file in (string[])["scores.jsonl", "rejects.jsonl"])
            Assert.Equal(File.ReadAllText(_undisturbed[file]), File.ReadAllText(_folder[file]));
        Assert.Equal(SnapshotText.Of(undisturbed.Health), SnapshotText.Of(run.Health));
        Assert.Equal(SnapshotText.Of(undisturbed.Engine.Model()), SnapshotText.Of(run.Engine.Model()));
    }

    [Fact]
    public async Task Run_Undisturbed_ScoresAndRejectsEveryRecord()
    {
        var run = await RunAsync(LoopStream.Definition(_undisturbed));

        int scores = File.ReadLines(_undisturbed["scores.jsonl"]).Count();
        int rejects = File.ReadLines(_undisturbed["rejects.jsonl"]).Count();
        Assert.Equal(Lines, run.Health.Records);
        Assert.Equal(run.Health.Events, scores);
        Assert.Equal(run.Health.Rejected, rejects);
        Assert.Equal(run.Health.Records, run.Progress.Records);
        Assert.Equal(4, run.Health.RejectsByReason.Count);
        Assert.True(run.Health.Labelled > 500);
        Assert.True(run.Health.Histories is { Evictions: > 100, Misses: > 100 }, run.Health.Histories.ToString());
        Assert.True(run.Progress.Commits >= Lines / 128);
        Assert.False(run.IsResumed);
    }

    // The stream is given piece by piece, each time to a new worker that finds the state of the last.
    [Theory]
    [InlineData(1)]
    [InlineData(64)]
    public async Task Run_StoppedAndResumedAtEveryCommit_GivesTheSame(int batchSize)
    {
        byte[] all = File.ReadAllBytes(_folder["quay.jsonl"]);
        StreamRun? run = null;
        for (int i = 1; i <= 20; i++)
        {
            int lineEnd = all.AsSpan(0, all.Length * i / 20).LastIndexOf((byte)'\n') + 1;
            File.WriteAllBytes(_folder["quay.jsonl"], all[..lineEnd]);
            run = await RunAsync(LoopStream.Definition(_folder), batchSize);
            Assert.Equal(i > 1, run.IsResumed);
        }

        await AssertSameAsUndisturbedAsync(run!);
    }

    // Every step is tried: before and after every read, write and flush, and within every commit.
    [Fact]
    public async Task Run_DiesAtEachStepInTurn_GivesTheSameInTheEnd()
    {
        byte[] recording = LoopStream.Create(800);
        _undisturbed.Write("quay.jsonl", recording);
        _folder.Write("quay.jsonl", recording);
        var definition = LoopStream.Definition(_folder, commitEvery: 400);
        int step = 1;
        for (; await DiesAsync(definition, step); step++)
        {
            await AssertSameAsUndisturbedAsync(await RunAsync(definition, batchSize: 200));
            File.Delete(_folder["scores.jsonl"]);
            File.Delete(_folder["rejects.jsonl"]);
            Directory.Delete(_folder["state"], recursive: true);
        }

        Assert.InRange(step, 40, 60);
    }

    private static async Task<bool> DiesAsync(StreamDefinition definition, int step)
    {
        try
        {
            await RunAsync(definition, batchSize: 200, new Death(step));
            return false;
        }
        catch (DeathException)
        {
            return true;
        }
    }

    [Fact]
    public async Task Run_DiesAtRandomStepsAgainAndAgain_GivesTheSameInTheEnd()
    {
        var random = new Random(5);
        int deaths = 0;
        StreamRun? run = null;
        while (run is null)
        {
            try
            {
                run = await RunAsync(LoopStream.Definition(_folder), random.Next(1, 100), new Death(random.Next(1, 60)));
            }
            catch (DeathException)
            {
                deaths++;
            }
        }

        Assert.True(deaths >= 5);
        await AssertSameAsUndisturbedAsync(run);
    }

    [Fact]
    public async Task Run_ScoreFileCutBelowTheCommit_ThrowsAndLeavesAll()
    {
        await RunAsync(LoopStream.Definition(_folder));
        byte[] rejects = File.ReadAllBytes(_folder["rejects.jsonl"]);
        using (var file = new FileStream(_folder["scores.jsonl"], FileMode.Open)) file.SetLength(10);

        var error = await Assert.ThrowsAsync<PipelineException>(() => RunAsync(LoopStream.Definition(_folder)));
        Assert.StartsWith($"{_folder["scores.jsonl"]} holds 10 bytes, but ", error.Message, StringComparison.Ordinal);
        Assert.Equal(rejects, File.ReadAllBytes(_folder["rejects.jsonl"]));
    }

    [Fact]
    public async Task Run_StateLostButScoresThere_Throws()
    {
        await RunAsync(LoopStream.Definition(_folder));
        Directory.Delete(_folder["state"], recursive: true);

        var error = await Assert.ThrowsAsync<PipelineException>(() => RunAsync(LoopStream.Definition(_folder)));
        Assert.Contains("that the state knows nothing of", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Run_RejectsWantedLater_BeginThere()
    {
        byte[] all = File.ReadAllBytes(_folder["quay.jsonl"]);
        int half = all.AsSpan(0, all.Length / 2).LastIndexOf((byte)'\n') + 1;
        File.WriteAllBytes(_folder["quay.jsonl"], all[..half]);
        using (var first = LoopStream.Open(LoopStream.Definition(_folder) with { Rejects = null }, new LoopOptions(), TimeProvider.System))
            await first.RunAsync(TestContext.Current.CancellationToken);
        File.WriteAllBytes(_folder["quay.jsonl"], all);

        // Dies after it wrote rejects and before it commits any.
        await Assert.ThrowsAsync<DeathException>(() => RunAsync(LoopStream.Definition(_folder, commitEvery: 10_000), 10_000, new Death(13)));
        Assert.NotEqual(0, new FileInfo(_folder["rejects.jsonl"]).Length);
        await RunAsync(LoopStream.Definition(_folder));
        await RunAsync(LoopStream.Definition(_undisturbed));

        Assert.EndsWith(File.ReadAllText(_folder["rejects.jsonl"]), File.ReadAllText(_undisturbed["rejects.jsonl"]), StringComparison.Ordinal);
        Assert.Equal(File.ReadAllText(_undisturbed["scores.jsonl"]), File.ReadAllText(_folder["scores.jsonl"]));
    }

    [Fact]
    public async Task Run_ScoreDiskFull_SaysSoAndCommitsNothing()
    {
        Assert.SkipUnless(File.Exists("/dev/full"), "There is no /dev/full here.");
        var definition = LoopStream.Definition(_folder) with { Scores = new FileOutputOptions("/dev/full") };

        var error = await Assert.ThrowsAsync<PipelineException>(() => RunAsync(definition));
        Assert.StartsWith("There is no room left on the disk for /dev/full.", error.Message, StringComparison.Ordinal);

        // With room on another disk the same state goes on.
        await AssertSameAsUndisturbedAsync(await RunAsync(LoopStream.Definition(_folder)));
    }
}
