using System.Collections.Concurrent;
using System.Diagnostics;
using System.Diagnostics.Metrics;
using StreamLogit.Engine;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Tests.Stages;

public sealed class LoopMeterTests : IDisposable
{
    // Other tests measure in the same process; this is told apart by its name.
    private const string System = "of-this-test";
    private const int Records = 1000;

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Run_WithListener_MeasuresEveryBatchRecordAndCommit()
    {
        var measured = new ConcurrentQueue<(string Name, double Value, Dictionary<string, object?> Tags)>();
        using var listener = new MeterListener
        {
            InstrumentPublished = (instrument, listener) => { if (instrument.Meter.Name == PipelineInstruments.Name) listener.EnableMeasurementEvents(instrument); },
        };
        listener.SetMeasurementEventCallback<long>((instrument, value, tags, _) => Take(instrument, value, tags));
        listener.SetMeasurementEventCallback<double>((instrument, value, tags, _) => Take(instrument, value, tags));
        listener.Start();

        var loop = await RunAsync();

        Assert.Equal(Records, Values("messaging.client.consumed.messages", "poll").Sum());
        Assert.Equal(Records / 10, Values("messaging.process.duration", "process").Count);
        Assert.Equal(Records / 10, Values("streamlogit.latency", null).Count);
        Assert.Equal(loop.Health.Events, (long)Values("messaging.client.sent.messages", "send").Sum());
        Assert.Equal(loop.Progress.Commits, Values("messaging.client.operation.duration", "commit").Count);
        Assert.All(measured, m => Assert.True(m.Value >= 0));
        Assert.Equal(TimeSpan.Zero, loop.Standstill);

        void Take<T>(Instrument instrument, T value, ReadOnlySpan<KeyValuePair<string, object?>> tags) where T : IConvertible
        {
            var all = new Dictionary<string, object?>(tags.ToArray());
            if (all.GetValueOrDefault("messaging.system") as string == System) measured.Enqueue((instrument.Name, value.ToDouble(null), all));
        }

        List<double> Values(string name, string? operation) =>
            [.. measured.Where(m => m.Name == name && m.Tags.GetValueOrDefault("messaging.operation.name") as string == operation).Select(m => m.Value)];
    }

    [Fact]
    public async Task Run_WithListener_TracesEveryBatchWithItsParts()
    {
        var spans = new ConcurrentQueue<Activity>();
        using var listener = new ActivityListener
        {
            ShouldListenTo = source => source.Name == PipelineInstruments.Name,
            Sample = (ref _) => ActivitySamplingResult.AllDataAndRecorded,
            ActivityStopped = spans.Enqueue,
        };
        ActivitySource.AddActivityListener(listener);

        var loop = await RunAsync();

        var batches = spans.Where(span => span.GetTagItem("messaging.system") as string == System).ToList();
        Assert.Equal(Records / 10, batches.Count);
        Assert.All(batches, batch =>
        {
            Assert.Equal((ActivityKind.Consumer, "process", 10), (batch.Kind, batch.DisplayName, batch.GetTagItem("messaging.batch.message_count")));
            Assert.Null(batch.Parent);
        });
        var ids = batches.ToDictionary(batch => batch.SpanId);
        var parts = spans.Where(span => ids.ContainsKey(span.ParentSpanId)).ToList();
        Assert.Equal(["commit", "score", "write"], parts.Select(part => part.OperationName).Distinct().Order());
        Assert.Equal(batches.Count, parts.Count(part => part.OperationName == "score"));
        Assert.All(parts, part => Assert.True(part.Duration <= ids[part.ParentSpanId].Duration + TimeSpan.FromMilliseconds(100)));
        Assert.Null(Activity.Current);
    }

    private async Task<ScoringLoop> RunAsync()
    {
        using var state = StateStore.Open(_folder["state"], "quay", "{}");
        using var source = new NamedSource(FileSource.Open(
            new FileSourceOptions(_folder.Write("quay.jsonl", LoopStream.CreateClean(Records)), RecordingFormat.JsonLines), LoopStream.MaximumBytes, TimeProvider.System));
        using var sink = new NamedSink();
        var loop = new ScoringLoop(
            new ScoringEngine(LoopStream.Engine), new StreamEnds(source, [sink]), state, new LoopOptions { BatchSize = 10, CommitEveryEvents = 200 }, TimeProvider.System);
        await loop.RunAsync(TestContext.Current.CancellationToken);
        return loop;
    }

    private sealed class NamedSource(IRecordSource inner) : IRecordSource
    {
        public string MessagingSystem => System;

        public SourcePosition Position => inner.Position;

        public SourceProgress Progress => inner.Progress;

        public void Seek(SourcePosition position) => inner.Seek(position);

        public ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation) => inner.FillAsync(batch, maximumRecords, cancellation);

        public void Dispose() => inner.Dispose();
    }

    private sealed class NamedSink : IScoreSink
    {
        public string Name => "scores";

        public string MessagingSystem => System;

        public void Start(long? mark) { }

        public void Write(RecordBatch records, ScoreBatch scores) { }

        public long Flush() => 0;

        public void Dispose() { }
    }
}
