using System.Collections.Immutable;
using StreamLogit.Engine.Learning;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>
/// Replays recordings with a definition and variants of it, and compares them label by label. The scores of each have the bits of a replay of its own.
/// Where the engines do not fit into memory together, they take several passes, the reference in each of them.
/// </summary>
public sealed class BacktestRun
{
    // What an engine and its comparison take besides the coefficients: the names of slots, days, ranks.
    private const long BytesPerVariant = 6L << 20;
    private const long BytesPerSlot = 24;
    private readonly BacktestOptions _options;
    private readonly IReadOnlyList<FileSourceOptions> _recordings;
    private readonly TimeProvider _time;
    private readonly ImmutableArray<ImmutableArray<Variant>> _passes;
    private readonly long _labelBytes;
    private RecordingSequence? _source;
    private BacktestPass? _pass;
    private int _passesDone;
    private long _recordsDone;

    /// <param name="options">What is tried.</param>
    /// <param name="recordings">At least one recording.</param>
    /// <param name="time">The clock of waits.</param>
    /// <exception cref="InvalidRecordingException">Standard input would have to be read several times.</exception>
    public BacktestRun(BacktestOptions options, IReadOnlyList<FileSourceOptions> recordings, TimeProvider time)
    {
        (_options, _recordings, _time) = (options, recordings, time);
        long memory = options.MemoryBytes ?? GC.GetGCMemoryInfo().TotalAvailableMemoryBytes / 2;
        _passes = PassesWithin(memory);
        _labelBytes = Math.Max(1L << 20, memory / 2 / (_passes.Max(pass => pass.Length) + 1));
        if (_passes.Length > 1 && recordings.Any(recording => recording.Path == RecordingFile.StandardInput))
            throw new InvalidRecordingException(
                $"So many variants take {_passes.Length} passes over the recordings, and standard input comes once. Give a file, or fewer variants.");
    }

    /// <summary>Passes over the recordings that it takes.</summary>
    public int Passes => _passes.Length;

    /// <summary>The share done, 0 to 1, or null where nobody knows, and records done, each counted once a pass. Any thread may ask.</summary>
    public (double? Share, long Records) Progress
    {
        get
        {
            var progress = Volatile.Read(ref _source)?.Progress;
            double? share = progress switch
            {
                null or { TotalBytes: null } => null,
                { TotalBytes: 0 } => 1,
                { TotalBytes: long total } p => Math.Min(1, (double)p.Bytes / total),
            };
            return ((Volatile.Read(ref _passesDone) + share) / Passes, Volatile.Read(ref _recordsDone) + (Volatile.Read(ref _pass)?.Records ?? 0));
        }
    }

    /// <summary>Runs it. Where it is stopped, the result covers what was replayed by then.</summary>
    /// <exception cref="PipelineException">A recording cannot be read or scores cannot be written.</exception>
    public async Task<BacktestResult> RunAsync(CancellationToken stop)
    {
        using var stopHashing = CancellationTokenSource.CreateLinkedTokenSource(stop);
        var identities = Task.Run(() => IdentifyAsync(stopHashing.Token), CancellationToken.None);
        try
        {
            var result = await RunPassesAsync(stop).ConfigureAwait(false);
            return result with { Recordings = await identities.ConfigureAwait(false) };
        }
        catch
        {
            await stopHashing.CancelAsync().ConfigureAwait(false);
            await ((Task)identities).ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
            throw;
        }
    }

    private async Task<BacktestResult> RunPassesAsync(CancellationToken stop)
    {
        var reference = _options.Reference.Definition.Engine;
        var comparison = new ComparisonOptions { Cost = DecisionCost.OfCutoff(reference.Decision.Cutoff), Seed = _options.Seed };
        BacktestResult? result = null;
        for (int p = 0; p < _passes.Length; p++)
        {
            // A pass that was not begun when it was stopped has nothing to say; the first has at least counts.
            if (p > 0 && stop.IsCancellationRequested) return result! with { IsComplete = false, Passes = p };
            using var scores = p == 0 && _options.Scores is { } file ? new ScoreFile(file, reference) : null;
            scores?.Start(0);
            using var source = new RecordingSequence(_recordings, reference.Record.MaximumBytes, _time);
            using var pass = new BacktestPass(_passes[p].Insert(0, _options.Reference), _options, comparison, source, _labelBytes, p == 0, scores);
            Volatile.Write(ref _source, source);
            Volatile.Write(ref _pass, pass);
            await pass.RunAsync(stop).ConfigureAwait(false);
            result = Joined(result, pass, p + 1);
            Volatile.Write(ref _recordsDone, _recordsDone + pass.Records);
            Volatile.Write(ref _pass, null);
            if (p + 1 < _passes.Length) Volatile.Write(ref _passesDone, p + 1);
        }
        return result!;
    }

    private BacktestResult Joined(BacktestResult? earlier, BacktestPass pass, int passes)
    {
        var lanes = pass.Results();
        var comparison = pass.Comparison();
        if (earlier is not null)
        {
            // Only where all passes saw the same labels do their figures stand side by side.
            if (!pass.HasEnded) return earlier with { IsComplete = false, Passes = passes };
            comparison = earlier.Comparison with
            {
                Variants = [.. earlier.Comparison.Variants, .. comparison.Variants],
                Days = [.. earlier.Comparison.Days.Zip(comparison.Days, (a, b) => a with { Variants = [.. a.Variants, .. b.Variants] })],
            };
        }
        return new BacktestResult
        {
            Reference = earlier?.Reference ?? lanes[0],
            Variants = [.. earlier?.Variants ?? [], .. lanes[1..]],
            Comparison = comparison,
            Baselines = earlier?.Baselines ?? pass.Baselines(),
            LabelsLeftOut = Math.Max(earlier?.LabelsLeftOut ?? 0, pass.LabelsLeftOut),
            Span = _options.Span,
            LabelDelayMicroseconds = _options.Reference.Definition.Engine.Labels.DelayMicroseconds ?? 0,
            RivalUnusable = earlier?.RivalUnusable ?? pass.RivalUnusable,
            Passes = passes,
            IsComplete = pass.HasEnded,
            Recordings = [],
        };
    }

    private async Task<ImmutableArray<RecordingIdentity>> IdentifyAsync(CancellationToken stop)
    {
        var identities = ImmutableArray.CreateBuilder<RecordingIdentity>(_recordings.Count);
        foreach (var recording in _recordings) identities.Add(await RecordingIdentity.OfAsync(recording.Path, stop).ConfigureAwait(false));
        return identities.ToImmutable();
    }

    private ImmutableArray<ImmutableArray<Variant>> PassesWithin(long memory)
    {
        var passes = ImmutableArray.CreateBuilder<ImmutableArray<Variant>>();
        long reference = BytesOf(_options.Reference), bytes = reference;
        var pass = ImmutableArray.CreateBuilder<Variant>();
        foreach (var variant in _options.Variants)
        {
            if (pass.Count > 0 && bytes + BytesOf(variant) > memory / 2)
            {
                passes.Add(pass.DrainToImmutable());
                bytes = reference;
            }
            pass.Add(variant);
            bytes += BytesOf(variant);
        }
        passes.Add(pass.DrainToImmutable());
        return passes.ToImmutable();
    }

    private static long BytesOf(Variant variant)
    {
        var engine = variant.Definition.Engine;
        return CoefficientTables.Bytes(engine) + engine.Learning.Slots * BytesPerSlot + BytesPerVariant;
    }
}
