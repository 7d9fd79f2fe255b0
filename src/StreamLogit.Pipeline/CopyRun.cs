using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Stages;

namespace StreamLogit.Pipeline;

/// <summary>Moves the records of a source as they are to a recording or to a topic, without scoring them.</summary>
public sealed class CopyRun : IDisposable
{
    private const int BatchSize = 1024;

    private readonly IRecordSource _source;
    private readonly IScoreSink _sink;
    private readonly RecordBatch _batch;
    private readonly RecordDecoder _decoder;
    private readonly CommitClock _flushes;
    private readonly Pacer? _pacer;
    private long _records;

    /// <summary>Starts the sink, empty.</summary>
    /// <param name="definition">The stream.</param>
    /// <param name="source">Where records come from; the run disposes of it.</param>
    /// <param name="sink">Where they go; the run disposes of it.</param>
    /// <param name="speed">How many times faster than in the source time passes; null is as fast as possible.</param>
    /// <param name="time">The clock of flushes and of waits.</param>
    /// <exception cref="PipelineException">The sink cannot be written.</exception>
    public CopyRun(StreamDefinition definition, IRecordSource source, IScoreSink sink, double? speed, TimeProvider time)
    {
        var loop = new LoopOptions();
        var schema = new RecordSchema(definition.Engine);
        _batch = new RecordBatch(schema);
        _decoder = new RecordDecoder(schema);
        _flushes = new CommitClock(loop.CommitEveryEvents, loop.CommitEveryTime, time);
        _pacer = speed is { } factor ? new Pacer(factor, BatchSize, time) : null;
        _source = source;
        _sink = sink;
        try
        {
            _sink.Start(null);
        }
        catch
        {
            Dispose();
            throw;
        }
    }

    /// <summary>How far it has come. Any thread may ask.</summary>
    public LoopProgress Progress => new(Volatile.Read(ref _records), _source.Progress, 0);

    /// <summary>Runs until the source ends or it is stopped; either way all that was read, but for what is not due yet, is in the sink.</summary>
    /// <returns>The number of records.</returns>
    /// <exception cref="PipelineException">The source cannot be read, or the sink cannot be written.</exception>
    public async Task<long> RunAsync(CancellationToken stop)
    {
        var none = new ScoreBatch(0);
        while (!stop.IsCancellationRequested)
        {
            _batch.Clear();
            var outcome = await _source.FillAsync(_batch, _pacer?.BatchSize ?? BatchSize, stop).ConfigureAwait(false);
            if (outcome == FillOutcome.Ended) break;
            if (outcome == FillOutcome.Filled)
            {
                // Decoded only for ids and times.
                _decoder.Decode(_batch);
                if (!await IsDueAsync(stop).ConfigureAwait(false)) break;
                _sink.Write(_batch, none);
                Volatile.Write(ref _records, _records + _batch.Count);
                _flushes.Add(_batch.Count);
            }
            if (!_flushes.IsDue) continue;
            _sink.Flush();
            _flushes.Restart();
        }
        _sink.Flush();
        return _records;
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        _source.Dispose();
        _sink.Dispose();
    }

    /// <summary>Waits until the batch is due; false when the run is stopped before.</summary>
    private async ValueTask<bool> IsDueAsync(CancellationToken stop)
    {
        if (_pacer is null) return true;
        _pacer.See(_batch);
        while (!await _pacer.WaitAsync(stop).ConfigureAwait(false))
        {
            if (stop.IsCancellationRequested) return false;
        }
        return true;
    }
}
