using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Pipeline.Stages;

/// <summary>Reads and decodes batches, and decides after which of them a commit follows. The last thing it sends is always a commit.</summary>
internal sealed class ReadStage(
    IRecordSource source, IStreamTransaction? transaction, RecordDecoder decoder, Conveyor conveyor, LoopMeter meter, LoopOptions options, TimeProvider time)
{
    private readonly CommitClock _commits = new(options.CommitEveryEvents, options.CommitEveryTime, time);
    private readonly CommitClock _transactions = new(options.TransactionEveryEvents, options.TransactionEveryTime, time);
    private readonly Pacer? _pacer = options.Speed is double speed ? new Pacer(speed, options.BatchSize, time) : null;
    private readonly Action<RecordBatch>? _cut = options.Span?.Cutter();
    private bool _isPaused = true;

    private bool IsPauseDue => !_isPaused || _commits.IsDue || IsTransactionDue;

    private bool IsTransactionDue => transaction is not null && _transactions.IsDue;

    public async Task RunAsync(CancellationToken stop)
    {
        SourcePosition? held = null;
        bool hasEnded = false;
        var batch = await TakeEmpty().ConfigureAwait(false);
        while (!stop.IsCancellationRequested)
        {
            batch.Clear();
            // A batch that is still held back when the run is stopped was never given: the next run reads it again.
            held = _pacer is null ? null : source.Position;
            batch.IsRepeated = transaction?.IsRepeating ?? false;
            var outcome = await source.FillAsync(batch.Records, _pacer?.BatchSize ?? options.BatchSize, stop).ConfigureAwait(false);
            hasEnded = outcome == FillOutcome.Ended;
            if (hasEnded) break;
            if (outcome == FillOutcome.Idle)
            {
                if (!IsPauseDue) continue;
                await SendPauseAsync(batch, source.Position).ConfigureAwait(false);
            }
            else
            {
                decoder.Decode(batch.Records);
                _cut?.Invoke(batch.Records);
                if (held is not null && !await HoldAsync(batch.Records, held, stop).ConfigureAwait(false)) break;
                await SendAsync(batch).ConfigureAwait(false);
                held = null;
            }
            batch = await TakeEmpty().ConfigureAwait(false);
        }

        batch.Clear();
        batch.IsPause = true;
        batch.IsEnd = hasEnded && options.EndsWithSource;
        // What is given again ends in a transaction that the state does not hold yet: the next run begins with it anew.
        if (transaction is not { IsRepeating: true }) Commit(batch, held ?? source.Position);
        meter.SetOut(batch);
        await conveyor.Read.Writer.WriteAsync(batch, CancellationToken.None).ConfigureAwait(false);
        conveyor.Read.Writer.Complete();
    }

    // Not an async method of its own, which would allocate at every wait.
    private ValueTask<BatchInFlight> TakeEmpty() => conveyor.Empty.Reader.ReadAsync(CancellationToken.None);

    private ValueTask SendAsync(BatchInFlight batch)
    {
        if (!batch.IsRepeated) Count(batch);
        _isPaused = false;
        meter.SetOut(batch);
        return conveyor.Read.Writer.WriteAsync(batch, CancellationToken.None);
    }

    private ValueTask SendPauseAsync(BatchInFlight batch, SourcePosition position)
    {
        batch.IsPause = true;
        EndWhatIsDue(batch, position);
        _isPaused = true;
        meter.SetOut(batch);
        return conveyor.Read.Writer.WriteAsync(batch, CancellationToken.None);
    }

    private void Count(BatchInFlight batch)
    {
        _commits.Add(batch.Records.Count);
        _transactions.Add(batch.Records.Count);
        EndWhatIsDue(batch, null);
    }

    private void EndWhatIsDue(BatchInFlight batch, SourcePosition? position)
    {
        if (_commits.IsDue) Commit(batch, position ?? source.Position);
        else if (IsTransactionDue) EndTransaction(batch);
    }

    private void Commit(BatchInFlight batch, SourcePosition position)
    {
        batch.CommitAt = position;
        _commits.Restart();
        EndTransaction(batch);
    }

    private void EndTransaction(BatchInFlight batch)
    {
        batch.IsTransactionDue = true;
        _transactions.Restart();
    }

    /// <summary>Holds records back until they are due; false when the run is stopped before.</summary>
    private async ValueTask<bool> HoldAsync(RecordBatch records, SourcePosition held, CancellationToken stop)
    {
        _pacer!.See(records);
        while (!await _pacer.WaitAsync(stop).ConfigureAwait(false))
        {
            if (stop.IsCancellationRequested) return false;
            if (!IsPauseDue) continue;
            var pause = await TakeEmpty().ConfigureAwait(false);
            pause.Clear();
            await SendPauseAsync(pause, held).ConfigureAwait(false);
        }
        return true;
    }
}
