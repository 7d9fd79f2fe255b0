using StreamLogit.Engine;
using StreamLogit.Engine.Health;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Stages;

/// <summary>Owns the engine: runs batches through it, captures its state where a commit follows, and publishes its health.</summary>
internal sealed class ScoreStage(ScoringEngine engine, Conveyor conveyor, StateArchive? archive, TimeSpan healthEvery, TimeProvider time)
{
    private HealthSnapshot _health = engine.Health();
    private long _published = time.GetTimestamp();

    /// <summary>The snapshot published last. Any thread may ask.</summary>
    public HealthSnapshot Health => Volatile.Read(ref _health);

    public async Task RunAsync()
    {
        var reader = conveyor.Read.Reader;
        while (await reader.WaitToReadAsync(CancellationToken.None).ConfigureAwait(false))
        {
            while (reader.TryRead(out var batch))
            {
                Run(batch);
                await conveyor.Scored.Writer.WriteAsync(batch, CancellationToken.None).ConfigureAwait(false);
            }
        }
        conveyor.Scored.Writer.TryComplete();
    }

    private void Run(BatchInFlight batch)
    {
        if (batch.Records.Count > 0) engine.Process(batch.Records, batch.Scores);
        if (batch.IsEnd) engine.End(batch.Records);
        if (batch.CommitAt is not null && archive is not null)
        {
            batch.Changes = archive.Take();
            engine.Save(batch.Changes);
        }
        if (!batch.IsPause && time.GetElapsedTime(_published) < healthEvery) return;
        Volatile.Write(ref _health, engine.Health());
        _published = time.GetTimestamp();
    }
}
