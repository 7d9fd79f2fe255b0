using System.Collections.Immutable;
using StreamLogit.Pipeline.State;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Pipeline.Stages;

/// <summary>Writes what came of batches, and commits: first the outputs are made durable, then the state that counts them. Transactions end in between.</summary>
internal sealed class WriteStage(StreamEnds ends, StateStore? state, Conveyor conveyor, LoopMeter meter, TimeProvider time)
{
    private readonly RecentRejects _rejects = new();
    private readonly MergedOrder _order = new();
    private long _records;
    private long _commits;
    private long _transactions;

    /// <summary>Records written. Any thread may ask.</summary>
    public long Records => Volatile.Read(ref _records);

    /// <summary>Commits made. Any thread may ask.</summary>
    public long Commits => Volatile.Read(ref _commits);

    /// <summary>Examples of the latest rejects. Any thread may ask.</summary>
    public ImmutableArray<RejectExample> RejectExamples => _rejects.Examples;

    /// <summary>Transactions committed. Any thread may ask.</summary>
    public long Transactions => Volatile.Read(ref _transactions);

    public async Task RunAsync()
    {
        var reader = conveyor.Scored.Reader;
        while (await reader.WaitToReadAsync(CancellationToken.None).ConfigureAwait(false))
        {
            while (reader.TryRead(out var batch))
            {
                Write(batch);
                if (batch.IsTransactionDue) EndTransaction();
                if (batch.CommitAt is { } position) Commit(position, batch);
                meter.Arrive(batch);
                // There is room for every batch that exists, unless another stage failed and closed the channel.
                conveyor.Empty.Writer.TryWrite(batch);
            }
        }
    }

    private void Write(BatchInFlight batch)
    {
        if (batch.Records.Count == 0 && batch.Records.Rejects.Count == 0) return;
        long start = time.GetTimestamp();
        foreach (var sink in ends.Sinks)
        {
            if (batch.IsRepeated) sink.Repeat(batch.Records, batch.Scores);
            else sink.Write(batch.Records, batch.Scores);
        }
        if (ends.Transaction is not null && !batch.IsRepeated) _order.Add(batch.Records);
        meter.EndWriting(batch, start);
        _rejects.Add(batch.Records);
        Volatile.Write(ref _records, _records + batch.Records.Count);
    }

    private void EndTransaction()
    {
        if (ends.Transaction is not { } transaction) return;
        var entry = _order.Take();
        if (entry.Spans.IsEmpty) return;
        // The order must be known before anybody can see a score: whoever comes after this run has to repeat it.
        state?.AppendJournal(entry);
        transaction.Commit(entry.Spans);
        state?.ConfirmJournal();
        Volatile.Write(ref _transactions, _transactions + 1);
    }

    private void Commit(SourcePosition position, BatchInFlight batch)
    {
        long start = time.GetTimestamp();
        var marks = ImmutableSortedDictionary.CreateBuilder<string, long>(StringComparer.Ordinal);
        foreach (var sink in ends.Sinks) marks[sink.Name] = sink.Flush();
        if (state is null || batch.Changes is not { } changes) return;
        state.Commit(new Checkpoint(position, marks.ToImmutable(), changes));
        state.Archive.Committed(changes);
        ends.Source.Committed(position);
        Volatile.Write(ref _commits, _commits + 1);
        meter.EndCommit(batch, start);
    }
}
