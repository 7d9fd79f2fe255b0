using System.Collections.Immutable;
using StreamLogit.Engine;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Stages;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline;

/// <summary>
/// Reads batches of records, runs them through the engine, writes what comes of them, and commits. Each of the three goes on at its
/// own pace, on a task of its own. How the batches are cut changes no bit of any score.
/// </summary>
public sealed class ScoringLoop
{
    private readonly IRecordSource _source;
    private readonly Conveyor _conveyor;
    private readonly LoopMeter _meter;
    private readonly ReadStage _read;
    private readonly ScoreStage _score;
    private readonly WriteStage _write;

    /// <summary>A loop that runs once. Source, engine and sinks stand where the state says.</summary>
    /// <param name="engine">The engine, which is the loop's alone until it ends.</param>
    /// <param name="ends">Where records come from and results go; each sink is started.</param>
    /// <param name="state">Where commits go, or null where nothing is kept.</param>
    /// <param name="options">How records are moved.</param>
    /// <param name="time">The clock of commits, of waits and of health.</param>
    public ScoringLoop(
        ScoringEngine engine, StreamEnds ends, StateStore? state, LoopOptions options, TimeProvider time)
    {
        ArgumentOutOfRangeException.ThrowIfLessThan(options.BatchSize, 1);
        // A batch may be held back while another carries a commit.
        ArgumentOutOfRangeException.ThrowIfLessThan(options.Batches, 2);
        _source = ends.Source;
        _conveyor = new Conveyor(options.Batches, () => new BatchInFlight(new RecordBatch(engine.Schema), engine.CreateScoreBatch()));
        _meter = new LoopMeter(ends.Source, ends.Sinks, time);
        _read = new ReadStage(ends.Source, ends.Transaction, new RecordDecoder(engine.Schema), _conveyor, _meter, options, time);
        _score = new ScoreStage(engine, _conveyor, _meter, state?.Archive, options, time);
        _write = new WriteStage(ends, state, _conveyor, _meter, time);
    }

    /// <summary>The latest health snapshot. Any thread may ask.</summary>
    public HealthSnapshot Health => _score.Health;

    /// <summary>The largest coefficients found last, or null before or where none are looked for. Any thread may ask.</summary>
    public LargestCoefficients? Coefficients => _score.Coefficients;

    /// <summary>Examples of the latest rejects. Any thread may ask.</summary>
    public ImmutableArray<RejectExample> RejectExamples => _write.RejectExamples;

    /// <summary>How far it has come. Any thread may ask.</summary>
    public LoopProgress Progress => new(_write.Records, _source.Progress, _write.Commits, _write.Transactions);

    /// <summary>For how long batches have been under way without one of them coming through; 0 where none is. Any thread may ask.</summary>
    public TimeSpan Standstill => _meter.Standstill;

    /// <summary>Runs until the source ends or the run is stopped; either way it ends with a commit.</summary>
    /// <param name="stop">Stops the run after the batches that are under way.</param>
    /// <exception cref="PipelineException">What surrounds the engine is broken. Nothing after the last commit counts.</exception>
    public async Task RunAsync(CancellationToken stop)
    {
        using var stopReading = CancellationTokenSource.CreateLinkedTokenSource(stop);
        var token = stopReading.Token;
        await Task.WhenAll(
            _conveyor.Start(() => _read.RunAsync(token), stopReading),
            _conveyor.Start(_score.RunAsync, stopReading),
            _conveyor.Start(_write.RunAsync, stopReading)).ConfigureAwait(false);
        _conveyor.ThrowFault();
    }
}
