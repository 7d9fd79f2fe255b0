using System.Collections.Immutable;
using StreamLogit.Engine;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Tests.Stages;

public sealed class ScoringLoopTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();
    private readonly JumpingTime _time = new();
    private readonly CancellationTokenSource _stop = new();

    public void Dispose()
    {
        _folder.Dispose();
        _stop.Dispose();
    }

    private ScoringLoop NewLoop(IRecordSource source, LoopOptions options, StateStore? state = null, params ImmutableArray<IScoreSink> sinks) =>
        new(new ScoringEngine(LoopStream.Engine), new StreamEnds(source, sinks), state, options, _time);

    private FileSource Open(byte[] recording, bool follow = false) => FileSource.Open(
        new FileSourceOptions(_folder.Write("quay.jsonl", recording), RecordingFormat.JsonLines, follow), LoopStream.MaximumBytes, _time);

    [Theory]
    [InlineData("read")]
    [InlineData("write")]
    [InlineData("commit")]
    public async Task Run_AStageFails_StopsAllAndThrowsOnce(string stage)
    {
        using var state = StateStore.Open(_folder["state"], "quay", "{}");
        if (stage == "commit") state.BeforeCommit = () => throw new DeathException();
        using var source = new DyingSource(Open(LoopStream.Create(5000)), new Death(stage == "read" ? 20 : 0));
        using var sink = new DyingSink(new ScoreHash(), new Death(stage == "write" ? 20 : 0));
        var loop = NewLoop(source, new LoopOptions { BatchSize = 10, CommitEveryEvents = 1000, Batches = 2 }, state, sink);

        await Assert.ThrowsAsync<DeathException>(() => loop.RunAsync(TestContext.Current.CancellationToken));
        Assert.Equal(0, loop.Progress.Commits);
        Assert.Null(state.Read());
        Assert.True(loop.Progress.Records < 5000);
    }

    [Fact]
    public async Task Run_Stopped_EndsWithACommitOfAllThatWasWritten()
    {
        using var state = StateStore.Open(_folder["state"], "quay", "{}");
        using var source = Open(LoopStream.Create(5000));
        using var sink = new StoppingSink(after: 500, _stop);
        var loop = NewLoop(source, new LoopOptions { BatchSize = 10, Batches = 4 }, state, sink);

        await loop.RunAsync(_stop.Token);

        Assert.InRange(sink.Records, 500, 600);
        Assert.Equal(sink.Records, loop.Progress.Records);
        Assert.Equal(sink.Records, loop.Health.Records);
        Assert.Equal(1, loop.Progress.Commits);
        var origin = Assert.Single(state.Read()!.Position.Origins);
        Assert.Equal(sink.Records, origin.Number);
    }

    [Fact]
    public async Task Run_EveryEvents_CommitsThatOften()
    {
        using var state = StateStore.Open(_folder["state"], "quay", "{}");
        using var source = Open(LoopStream.Create(1000));
        var loop = NewLoop(source, new LoopOptions { BatchSize = 10, CommitEveryEvents = 95 }, state);

        await loop.RunAsync(TestContext.Current.CancellationToken);

        // One after every 100 records, and one at the end.
        Assert.Equal(11, loop.Progress.Commits);
    }

    [Fact]
    public async Task Run_FollowedFileIsIdle_CommitsWhenTimeIsUpAndThenNoMore()
    {
        using var state = StateStore.Open(_folder["state"], "quay", "{}");
        using var source = new IdleCountingSource(Open(LoopStream.Create(30), follow: true), idles: 1000, _stop);
        var loop = NewLoop(source, new LoopOptions { CommitEveryTime = TimeSpan.FromSeconds(10) }, state);

        await loop.RunAsync(_stop.Token);

        // 1000 idle moments of 100 ms: one commit when 10 s were over, none for nothing, and the one at the end.
        Assert.True(_time.Elapsed > TimeSpan.FromSeconds(90));
        Assert.Equal(2, loop.Progress.Commits);
        Assert.Equal(30, loop.Health.Records);
    }

    [Fact]
    public async Task Run_Speed_TakesTheTimeOfTheRecordsDividedByIt()
    {
        using var source = Open(LoopStream.Create(3601));
        var loop = NewLoop(source, new LoopOptions { Speed = 60 });

        await loop.RunAsync(TestContext.Current.CancellationToken);

        // Records lie a second apart. Rejects have no time; the last records of this stream are none.
        Assert.InRange(_time.Elapsed.TotalSeconds, 59, 60.01);
        Assert.Equal(3601, loop.Health.Records);
    }

    [Fact]
    public async Task Run_SpeedAndStopped_CommitsBeforeTheRecordHeldBack()
    {
        string first = """{"id":"a","time":"2026-03-01T08:00:00Z","amount":1}""";
        string second = """{"id":"b","time":"2026-03-02T08:00:00Z","amount":1}""";
        _folder.Write("quay.jsonl", $"{first}\n{second}\n");
        using var state = StateStore.Open(_folder["state"], "quay", "{}");
        using var source = FileSource.Open(new FileSourceOptions(_folder["quay.jsonl"], RecordingFormat.JsonLines), 1000, _time);
        // Stops within the day that the second record is held back.
        using var sink = new StoppingSink(after: 1, _stop);
        var loop = NewLoop(source, new LoopOptions { Speed = 1 }, state, sink);

        await loop.RunAsync(_stop.Token);

        Assert.Equal(1, sink.Records);
        Assert.Equal(first.Length + 1, Assert.Single(state.Read()!.Position.Origins).Offset);
    }

    [Fact]
    public void Constructor_OneBatch_Throws()
    {
        using var source = Open([]);

        Assert.Throws<ArgumentOutOfRangeException>(() => NewLoop(source, new LoopOptions { Batches = 1 }));
        Assert.Throws<ArgumentOutOfRangeException>(() => NewLoop(source, new LoopOptions { BatchSize = 0 }));
    }

    private sealed class StoppingSink(int after, CancellationTokenSource stop) : IScoreSink
    {
        public int Records { get; private set; }

        public string Name => "stopping";

        public void Start(long? mark) { }

        public void Write(RecordBatch records, ScoreBatch scores)
        {
            Records += records.Count;
            if (Records >= after) stop.Cancel();
        }

        public long Flush() => Records;

        public void Dispose() { }
    }

    private sealed class IdleCountingSource(IRecordSource inner, int idles, CancellationTokenSource stop) : IRecordSource
    {
        private int _idles;

        public SourcePosition Position => inner.Position;

        public SourceProgress Progress => inner.Progress;

        public void Seek(SourcePosition position) => inner.Seek(position);

        public async ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
        {
            var outcome = await inner.FillAsync(batch, maximumRecords, cancellation);
            if (outcome == FillOutcome.Idle && ++_idles == idles) await stop.CancelAsync();
            return outcome;
        }

        public void Dispose() => inner.Dispose();
    }
}
