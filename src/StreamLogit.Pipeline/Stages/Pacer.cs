using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Stages;

/// <summary>
/// Lets records pass when they are due by their own times. While the records are behind, batches grow; as soon as one must wait,
/// they come one at a time again, so that none is held back by the record after it.
/// </summary>
internal sealed class Pacer(double speed, int batchSize, TimeProvider time)
{
    // A wait ends after at most this, so that commits fall due meanwhile.
    private static readonly TimeSpan LongestWait = TimeSpan.FromMilliseconds(100);

    private long _startTimestamp;
    private long _startMicroseconds;
    private long _clockMicroseconds = long.MinValue;

    /// <summary>How many records the next batch may have.</summary>
    public int BatchSize { get; private set; } = 1;

    /// <summary>Takes note of the times of a batch.</summary>
    public void See(RecordBatch batch)
    {
        foreach (ref readonly var record in batch.Records)
        {
            if (record.Kind == RecordKind.Reject) continue;
            if (_clockMicroseconds == long.MinValue)
            {
                _startMicroseconds = record.TimeMicroseconds;
                _startTimestamp = time.GetTimestamp();
            }
            _clockMicroseconds = Math.Max(_clockMicroseconds, record.TimeMicroseconds);
        }
        BatchSize = Math.Min(BatchSize * 2, batchSize);
    }

    /// <summary>Waits for the batch seen last; false when it is still not due and the caller should wait again.</summary>
    public async ValueTask<bool> WaitAsync(CancellationToken cancellation)
    {
        if (_clockMicroseconds == long.MinValue) return true;
        double dueSeconds = (_clockMicroseconds - _startMicroseconds) / 1e6 / speed;
        double waitSeconds = dueSeconds - time.GetElapsedTime(_startTimestamp).TotalSeconds;
        if (waitSeconds <= 0) return true;
        BatchSize = 1;
        bool isLast = waitSeconds <= LongestWait.TotalSeconds;
        var wait = isLast ? TimeSpan.FromSeconds(waitSeconds) : LongestWait;
        await Task.Delay(wait, time, cancellation).ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
        return isLast && !cancellation.IsCancellationRequested;
    }
}
