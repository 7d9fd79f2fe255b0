using System.Collections.Immutable;
using System.Diagnostics;

namespace StreamLogit.Pipeline.Stages;

/// <summary>Measures batches on their way, and knows whether they move. Each stage calls only its own methods.</summary>
internal sealed class LoopMeter
{
    private readonly TimeProvider _time;
    private readonly TagList _poll;
    private readonly TagList _process;
    private readonly TagList _commit;
    private readonly TagList _latency;
    private readonly ImmutableArray<(string Name, TagList Tags)> _sends;
    private readonly string _spanName;
    private int _underWay;
    private long _moved; // when a batch last came through, or the first one set out

    public LoopMeter(IRecordSource source, ImmutableArray<IScoreSink> sinks, TimeProvider time)
    {
        _time = time;
        _poll = Tags(source.MessagingSystem, source.Destination, "poll");
        _process = Tags(source.MessagingSystem, source.Destination, "process");
        _commit = Tags(source.MessagingSystem, source.Destination, "commit");
        _latency = new TagList { { "messaging.system", source.MessagingSystem } };
        _sends = [.. sinks.Select(sink => (sink.Name, Tags(sink.MessagingSystem, sink.Destination, "send", sink.Name)))];
        _spanName = source.Destination is { } destination ? $"process {destination}" : "process";
    }

    /// <summary>For how long batches have been under way without one of them coming through; 0 where none is. Any thread may ask.</summary>
    public TimeSpan Standstill => Volatile.Read(ref _underWay) == 0 ? TimeSpan.Zero : _time.GetElapsedTime(Volatile.Read(ref _moved));

    /// <summary>A batch has been read and sets out.</summary>
    public void SetOut(BatchInFlight batch)
    {
        batch.ReadAt = _time.GetTimestamp();
        if (Interlocked.Increment(ref _underWay) == 1) Volatile.Write(ref _moved, batch.ReadAt);
        int records = batch.Records.Count;
        if (records == 0) return;
        PipelineInstruments.Consumed.Add(records, _poll);
        PipelineInstruments.BatchRecords.Record(records);
        batch.Trace = Start(_spanName, ActivityKind.Consumer, default);
        if (batch.Trace is null) return;
        foreach (var (name, value) in _process) batch.Trace.SetTag(name, value);
        batch.Trace.SetTag("messaging.operation.type", "process");
        batch.Trace.SetTag("messaging.batch.message_count", records);
        // It goes on in other tasks, which name it as their parent.
        Activity.Current = null;
    }

    /// <summary>The engine takes a batch.</summary>
    public long StartProcessing() => _time.GetTimestamp();

    /// <summary>The engine is done with it.</summary>
    public void EndProcessing(BatchInFlight batch, long start)
    {
        if (batch.Records.Count == 0) return;
        var taken = _time.GetElapsedTime(start);
        PipelineInstruments.Processing.Record(taken.TotalSeconds, _process);
        Trace(batch, "score", taken);
    }

    /// <summary>What came of a batch has been written.</summary>
    public void EndWriting(BatchInFlight batch, long start)
    {
        var taken = _time.GetElapsedTime(start);
        foreach (var (name, tags) in _sends)
        {
            if (batch.IsRepeated) break; // written before, by a run that did not live to commit it
            int count = name switch
            {
                "scores" => batch.Scores.Count,
                "rejects" => batch.Records.Rejects.Count,
                _ => batch.Records.Count,
            };
            if (count > 0) PipelineInstruments.Sent.Add(count, tags);
        }
        if (_sends.Length > 0) PipelineInstruments.Operations.Record(taken.TotalSeconds, _sends[0].Tags);
        if (batch.Records.Count > 0) PipelineInstruments.Latency.Record(_time.GetElapsedTime(batch.ReadAt).TotalSeconds, _latency);
        Trace(batch, "write", taken);
    }

    /// <summary>A commit has been made.</summary>
    public void EndCommit(BatchInFlight batch, long start)
    {
        var taken = _time.GetElapsedTime(start);
        PipelineInstruments.Operations.Record(taken.TotalSeconds, _commit);
        Trace(batch, "commit", taken);
    }

    /// <summary>A batch has come through.</summary>
    public void Arrive(BatchInFlight batch)
    {
        batch.Trace?.Dispose();
        batch.Trace = null;
        Volatile.Write(ref _moved, _time.GetTimestamp());
        Interlocked.Decrement(ref _underWay);
    }

    private static void Trace(BatchInFlight batch, string name, TimeSpan taken)
    {
        if (batch.Trace is not { } parent) return;
        using var part = Start(name, ActivityKind.Internal, parent.Context);
        part?.SetStartTime(DateTime.UtcNow - taken);
    }

    private static Activity? Start(string name, ActivityKind kind, ActivityContext parent) => PipelineInstruments.Traces.StartActivity(name, kind, parent);

    private static TagList Tags(string system, string? destination, string operation, string? output = null)
    {
        var tags = new TagList { { "messaging.system", system }, { "messaging.operation.name", operation } };
        if (destination is not null) tags.Add("messaging.destination.name", destination);
        if (output is not null) tags.Add("streamlogit.output", output);
        return tags;
    }
}
