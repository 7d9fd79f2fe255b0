using StreamLogit.Engine;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay;

namespace StreamLogit.Pipeline.Tests.Stages;

/// <summary>Alone, because what is counted is what the whole process allocates.</summary>
[CollectionDefinition(nameof(AllocationTests), DisableParallelization = true)]
[Collection(nameof(AllocationTests))]
public sealed class AllocationTests : IDisposable
{
    private const int WarmUpRecords = 100_000;
    private const int MeasuredRecords = 200_000;

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Run_SteadyState_AllocatesNothingPerEvent()
    {
        string path = _folder.Write("quay.jsonl", LoopStream.CreateClean(WarmUpRecords + MeasuredRecords + 10_000));
        using var source = FileSource.Open(new FileSourceOptions(path, RecordingFormat.JsonLines), LoopStream.MaximumBytes, TimeProvider.System);
        using var scores = new ScoreFile(new FileOutputOptions(_folder["scores.jsonl"]), LoopStream.Engine);
        using var rejects = new RejectFile(new FileOutputOptions(_folder["rejects.jsonl"]));
        using var hash = new ScoreHash();
        using var meter = new AllocationMeter();
        scores.Start(null);
        rejects.Start(null);
        var options = new LoopOptions { HealthEvery = TimeSpan.FromDays(1), CommitEveryEvents = int.MaxValue, CommitEveryTime = TimeSpan.FromDays(1) };
        var loop = new ScoringLoop(new ScoringEngine(LoopStream.Engine), new StreamEnds(source, [scores, rejects, hash, meter]), state: null, options, TimeProvider.System);

        await loop.RunAsync(TestContext.Current.CancellationToken);

        Assert.Equal(0, loop.Health.Rejected);
        // The runtime may allocate a little for itself now and then; a loop that allocates once a batch has more.
        Assert.InRange(meter.AllocatedBytes, 0, MeasuredRecords / 50);
    }

    private sealed class AllocationMeter : IScoreSink
    {
        private long _records;
        private long _start;

        public long AllocatedBytes { get; private set; } = -1;

        public string Name => "allocation";

        public void Start(long? mark) { }

        public void Write(RecordBatch records, ScoreBatch scores)
        {
            if (_records < WarmUpRecords && _records + records.Count >= WarmUpRecords) _start = GC.GetTotalAllocatedBytes(precise: true);
            _records += records.Count;
            if (AllocatedBytes < 0 && _records >= WarmUpRecords + MeasuredRecords)
                AllocatedBytes = GC.GetTotalAllocatedBytes(precise: true) - _start;
        }

        public long Flush() => 0;

        public void Dispose() { }
    }
}
