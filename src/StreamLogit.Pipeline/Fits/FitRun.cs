using StreamLogit.Engine;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Fitting;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay;

namespace StreamLogit.Pipeline.Fits;

/// <summary>
/// Fits the coefficients of a definition to recordings: the loop and the engine of a live worker join events and labels and encode the features, as they
/// would be when the event is scored, and all labelled events are fitted together at the end. They are held in memory, some 30 to 60 bytes an event.
/// </summary>
public sealed class FitRun : IDisposable
{
    private readonly ScoringEngine _engine;
    private readonly RecordingSequence _source;
    private readonly TemporaryArchive _archive = new();
    private readonly ScoringLoop _loop;
    private readonly SparseRows _rows = new(new SparseColumns());

    /// <summary>Opens the recordings.</summary>
    /// <param name="definition">The features, and how labels are joined. Its bank and its warm start do not matter.</param>
    /// <param name="recordings">At least one recording.</param>
    /// <param name="options">How records are moved.</param>
    /// <param name="time">The clock of waits and of health.</param>
    /// <exception cref="InvalidRecordingException">A recording is not there.</exception>
    public FitRun(EngineDefinition definition, IReadOnlyList<FileSourceOptions> recordings, LoopOptions options, TimeProvider time)
    {
        // The engine needs some bank; the cheapest one will do.
        var learning = definition.Learning with { Bank = [new SgdSetting(1e-6, 0, 0)], PublishedSetting = null, WarmStart = null };
        _engine = new ScoringEngine(definition with { Learning = learning }, _archive)
        {
            GiveReasons = false,
            Labelled = Take,
            Corrected = Take,
        };
        _source = new RecordingSequence(recordings, definition.Record.MaximumBytes, time);
        _loop = new ScoringLoop(_engine, new StreamEnds(_source, []), state: null, options with { EndsWithSource = true }, time);
    }

    /// <summary>How far the reading has come. Any thread may ask.</summary>
    public LoopProgress Progress => _loop.Progress;

    /// <summary>Reads all recordings and fits.</summary>
    /// <param name="l2">The penalty, see <see cref="PenaltyOptions.L2"/>, or null for maximum likelihood.</param>
    /// <param name="stop">Stops the reading early.</param>
    /// <exception cref="PipelineException">A recording cannot be read, or there are too many columns for maximum likelihood.</exception>
    /// <exception cref="OperationCanceledException">It was stopped before the end.</exception>
    public async Task<FitResult> RunAsync(double? l2, CancellationToken stop)
    {
        await _loop.RunAsync(stop).ConfigureAwait(false);
        stop.ThrowIfCancellationRequested();
        _rows.Trim();
        var fitting = new RecordingFit(_engine, _rows);
        return l2 is { } penalty ? fitting.Penalised(penalty) : fitting.MaximumLikelihood();
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        _source.Dispose();
        _archive.Dispose();
    }

    private void Take(in LabelledEvent labelled)
    {
        _rows.TakeBack(labelled.Vector, 1 - labelled.Label, labelled.TakenBackWeight);
        _rows.Add(labelled.Vector, labelled.Label, labelled.Weight);
    }
}
