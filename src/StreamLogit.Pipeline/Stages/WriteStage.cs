using System.Collections.Immutable;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Stages;

/// <summary>Writes what came of batches, and commits: first the outputs are made durable, then the state that counts them.</summary>
internal sealed class WriteStage(IRecordSource source, ImmutableArray<IScoreSink> sinks, StateStore? state, Conveyor conveyor)
{
    private readonly RecentRejects _rejects = new();
    private long _records;
    private long _commits;

    /// <summary>Records written. Any thread may ask.</summary>
    public long Records => Volatile.Read(ref _records);

    /// <summary>Commits made. Any thread may ask.</summary>
    public long Commits => Volatile.Read(ref _commits);

    /// <summary>Examples of the latest rejects. Any thread may ask.</summary>
    public ImmutableArray<RejectExample> RejectExamples => _rejects.Examples;

    public async Task RunAsync()
    {
        var reader = conveyor.Scored.Reader;
        while (await reader.WaitToReadAsync(CancellationToken.None).ConfigureAwait(false))
        {
            while (reader.TryRead(out var batch))
            {
                Write(batch);
                if (batch.CommitAt is { } position) Commit(position, batch.Changes);
                // There is room for every batch that exists, unless another stage failed and closed the channel.
                conveyor.Empty.Writer.TryWrite(batch);
            }
        }
    }

    private void Write(BatchInFlight batch)
    {
        if (batch.Records.Count == 0 && batch.Records.Rejects.Count == 0) return;
        foreach (var sink in sinks) sink.Write(batch.Records, batch.Scores);
        _rejects.Add(batch.Records);
        Volatile.Write(ref _records, _records + batch.Records.Count);
    }

    private void Commit(SourcePosition position, StateBlocks? changes)
    {
        var marks = ImmutableSortedDictionary.CreateBuilder<string, long>(StringComparer.Ordinal);
        foreach (var sink in sinks) marks[sink.Name] = sink.Flush();
        if (state is null || changes is null) return;
        state.Commit(new Checkpoint(position, marks.ToImmutable(), changes));
        state.Archive.Committed(changes);
        source.Committed(position);
        Volatile.Write(ref _commits, _commits + 1);
    }
}
