using StreamLogit.Engine;
using StreamLogit.Engine.Health;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Stages;

/// <summary>Owns the engine: runs batches through it, captures its state where a commit follows, and publishes its health.</summary>
internal sealed class ScoreStage(ScoringEngine engine, Conveyor conveyor, LoopMeter meter, StateArchive? archive, LoopOptions options, TimeProvider time)
{
    // Some milliseconds at most, each time that health is published.
    private const int SlotsPerLook = 1 << 15;
    private const int SlotsPerPause = 1 << 18;

    private readonly CoefficientScan? _scan = options.LargestCoefficients > 0 ? new CoefficientScan(options.LargestCoefficients) : null;
    private LargestCoefficients? _coefficients;
    private HealthSnapshot _health = engine.Health();
    private long _published = time.GetTimestamp();

    /// <summary>The snapshot published last. Any thread may ask.</summary>
    public HealthSnapshot Health => Volatile.Read(ref _health);

    /// <summary>The largest coefficients found last, or null before. Any thread may ask.</summary>
    public LargestCoefficients? Coefficients => Volatile.Read(ref _coefficients);

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
        long start = meter.StartProcessing();
        if (batch.Records.Count > 0) engine.Process(batch.Records, batch.Scores);
        if (batch.IsEnd) engine.End(batch.Records);
        meter.EndProcessing(batch, start);
        if (batch.CommitAt is not null && archive is not null)
        {
            batch.Changes = archive.Take();
            engine.Save(batch.Changes);
        }
        if (!batch.IsPause && time.GetElapsedTime(_published) < options.HealthEvery) return;
        Volatile.Write(ref _health, engine.Health());
        if (_scan is not null && engine.Scan(_scan, batch.IsPause ? SlotsPerPause : SlotsPerLook) is { } found) Volatile.Write(ref _coefficients, found);
        _published = time.GetTimestamp();
    }
}
