using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Stages;

namespace StreamLogit.Pipeline;

/// <summary>Records the records of a definition's source, from its beginning, without scoring them.</summary>
public sealed class RecordRun : IDisposable
{
    private const int BatchSize = 1024;

    private readonly IRecordSource _source;
    private readonly RecordingFolder _recording;
    private readonly RecordBatch _batch;
    private readonly RecordDecoder _decoder;
    private readonly CommitClock _flushes;
    private long _records;

    /// <summary>Opens the source and an empty recording.</summary>
    /// <exception cref="PipelineException">The source is out of reach, or the folder holds recordings.</exception>
    public RecordRun(StreamDefinition definition, RecordingOptions options, TimeProvider time)
    {
        var loop = new LoopOptions();
        var schema = new RecordSchema(definition.Engine);
        _batch = new RecordBatch(schema);
        _decoder = new RecordDecoder(schema);
        _flushes = new CommitClock(loop.CommitEveryEvents, loop.CommitEveryTime, time);
        _source = StreamRun.OpenSource(definition, time);
        _recording = new RecordingFolder(options);
        try
        {
            _recording.Start(null);
        }
        catch
        {
            Dispose();
            throw;
        }
    }

    /// <summary>How far it has come. Any thread may ask.</summary>
    public LoopProgress Progress => new(Volatile.Read(ref _records), _source.Progress, 0);

    /// <summary>Runs until the source ends or it is stopped; either way all that was read is recorded.</summary>
    /// <returns>The number of records.</returns>
    /// <exception cref="PipelineException">The source cannot be read, or the recording cannot be written.</exception>
    public async Task<long> RunAsync(CancellationToken stop)
    {
        var none = new ScoreBatch(0);
        while (!stop.IsCancellationRequested)
        {
            _batch.Clear();
            var outcome = await _source.FillAsync(_batch, BatchSize, stop).ConfigureAwait(false);
            if (outcome == FillOutcome.Ended) break;
            if (outcome == FillOutcome.Filled)
            {
                // Decoded only for the times, which tell the days.
                _decoder.Decode(_batch);
                _recording.Write(_batch, none);
                Volatile.Write(ref _records, _records + _batch.Count);
                _flushes.Add(_batch.Count);
            }
            if (!_flushes.IsDue) continue;
            _recording.Flush();
            _flushes.Restart();
        }
        _recording.Flush();
        return _records;
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        _source.Dispose();
        _recording.Dispose();
    }
}
