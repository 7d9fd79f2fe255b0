using StreamLogit.Engine;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Replay;

/// <summary>
/// Runs recordings, one after the other, through the loop and the engine of a live worker, without a state and without outputs.
/// Its memory does not grow with the recordings.
/// </summary>
public sealed class ReplayRun : IDisposable
{
    private readonly ScoringEngine _engine;
    private readonly RecordingSequence _source;
    private readonly ScoreHash _hash = new();
    private readonly TemporaryArchive _archive = new();
    private readonly ScoringLoop _loop;

    /// <summary>Opens the recordings.</summary>
    /// <param name="definition">What the engine computes.</param>
    /// <param name="recordings">At least one recording.</param>
    /// <param name="options">How records are moved.</param>
    /// <param name="time">The clock of waits and of health.</param>
    /// <exception cref="InvalidRecordingException">A recording is not there.</exception>
    public ReplayRun(EngineDefinition definition, IReadOnlyList<FileSourceOptions> recordings, LoopOptions options, TimeProvider time)
    {
        _engine = new ScoringEngine(definition, _archive) { GiveReasons = false };
        _source = new RecordingSequence(recordings, definition.Record.MaximumBytes, time);
        _loop = new ScoringLoop(_engine, new StreamEnds(_source, [_hash]), state: null, options with { EndsWithSource = true }, time);
    }

    /// <summary>The latest health snapshot. Any thread may ask.</summary>
    public HealthSnapshot Health => _loop.Health;

    /// <summary>How far it has come. Any thread may ask.</summary>
    public LoopProgress Progress => _loop.Progress;

    /// <summary>Replays all recordings.</summary>
    /// <param name="stop">Stops it early; the result then covers what was replayed by then.</param>
    /// <exception cref="PipelineException">A recording cannot be read.</exception>
    public async Task<ReplayResult> RunAsync(CancellationToken stop)
    {
        await _loop.RunAsync(stop).ConfigureAwait(false);
        return new ReplayResult(_loop.Health, _hash.ToHexString(), _engine.Model(), !stop.IsCancellationRequested);
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        _source.Dispose();
        _hash.Dispose();
        _archive.Dispose();
    }
}
