using System.Collections.Immutable;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Fitting;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>
/// One pass over the recordings with the reference and some variants, an engine for each. They share reading and decoding; each engine gets copies of
/// the batches, as it marks rejects in them. Engines run side by side on the cores, batch by batch; labels are compared between the batches.
/// </summary>
internal sealed class BacktestPass : IDisposable
{
    private readonly IReadOnlyList<Variant> _variants;
    private readonly List<Lane> _lanes = [];
    private readonly List<RecordSchema> _schemas = [];
    private readonly Baselines? _baselines;
    private readonly VariantComparer _comparer;
    private readonly DecisionTally[] _decisions;
    private readonly LabelMatch _match;
    private readonly SharedReading _reading;
    private readonly RecordBatch[][] _copies; // by worker, by schema
    private readonly double[] _logOdds;
    private readonly double[] _probabilities;
    private readonly double[] _unused;
    private long _records;

    /// <param name="variants">The reference, then what is tried.</param>
    /// <param name="options">The backtest.</param>
    /// <param name="comparison">How variants are compared.</param>
    /// <param name="source">The records, from their beginning.</param>
    /// <param name="labelBytes">The memory of each engine for events that await their labels.</param>
    /// <param name="isFirst">Whether this is the pass that writes scores and compares baselines.</param>
    /// <param name="scores">Where scores of the reference go, started, or null.</param>
    public BacktestPass(
        IReadOnlyList<Variant> variants, BacktestOptions options, ComparisonOptions comparison, IRecordSource source, long labelBytes, bool isFirst,
        IScoreSink? scores)
    {
        _variants = variants;
        _baselines = isFirst ? new Baselines(options, comparison) : null;
        foreach (var variant in variants)
        {
            var definition = variant.Definition.Engine;
            definition = definition with { Labels = definition.Labels with { MemoryBytes = Math.Min(definition.Labels.MemoryBytes, labelBytes) } };
            bool isReference = _lanes.Count == 0;
            var lane = new Lane(definition, isReference ? scores : null, isReference ? _baselines?.Refit : null);
            lane.Schema = _schemas.FindIndex(lane.Engine.Schema.ReadsAs);
            if (lane.Schema < 0)
            {
                lane.Schema = _schemas.Count;
                _schemas.Add(lane.Engine.Schema);
            }
            _lanes.Add(lane);
        }
        _comparer = new VariantComparer([.. variants.Select(v => v.Name)], comparison);
        _decisions = [.. variants.Select(v => new DecisionTally(v.Definition.Engine.Decision.Cutoff))];
        _match = new LabelMatch(_lanes);
        var rival = isFirst && options.RivalField is { } field ? RivalProbabilities.SchemaOf(options.Reference.Definition.Engine, field) : null;
        _reading = new SharedReading(source, _schemas, rival, options.Span);
        int workers = Math.Min(Environment.ProcessorCount, _lanes.Count);
        _copies = [.. Enumerable.Range(0, workers).Select(_ => _schemas.Select(schema => new RecordBatch(schema)).ToArray())];
        (_logOdds, _probabilities, _unused) = (new double[_lanes.Count], new double[_lanes.Count], new double[_lanes.Count]);
    }

    /// <summary>Records that all engines have seen. Any thread may ask.</summary>
    public long Records => Volatile.Read(ref _records);

    /// <summary>Whether the recordings were read to their end.</summary>
    public bool HasEnded => _reading.HasEnded;

    public long LabelsLeftOut { get; private set; }

    public long RivalUnusable => _baselines?.Rival?.Unusable ?? 0;

    /// <summary>Runs to the end of the recordings or until it is stopped.</summary>
    public async Task RunAsync(CancellationToken stop)
    {
        using var stopReading = CancellationTokenSource.CreateLinkedTokenSource(stop);
        var reading = Task.Run(() => _reading.RunAsync(stopReading.Token), CancellationToken.None);
        try
        {
            await foreach (var batch in _reading.Decoded.ReadAllAsync(CancellationToken.None).ConfigureAwait(false))
            {
                RunEngines(batch);
                if (batch.Rival is not null) _baselines!.Rival!.Take(batch.Rival);
                CompareLabels();
                Volatile.Write(ref _records, _records + batch.BySchema[0].Count);
                _reading.Return(batch);
                if (stop.IsCancellationRequested) break;
            }
            if (!_reading.HasEnded) return;
            foreach (var lane in _lanes) lane.End(_copies[0][lane.Schema]);
            CompareLabels();
        }
        finally
        {
            await stopReading.CancelAsync().ConfigureAwait(false);
            // The reader may wait for an empty batch or for room.
            while (_reading.Decoded.TryRead(out var left)) _reading.Return(left);
            await reading.ConfigureAwait(false);
        }
    }

    public ComparisonResult Comparison() => _comparer.Result();

    public ImmutableArray<BaselineResult> Baselines() => _baselines?.Results() ?? [];

    public ImmutableArray<LaneResult> Results() =>
        [.. _lanes.Select((lane, i) => lane.Result(_variants[i].Name, _variants[i].Definition.EffectiveJson, _decisions[i].ToFigures()))];

    public void Dispose()
    {
        foreach (var lane in _lanes) lane.Dispose();
    }

    private void RunEngines(SharedBatch batch)
    {
        int next = -1;
        if (_copies.Length == 1) Work(0);
        else
        {
            try
            {
                Parallel.For(0, _copies.Length, Work);
            }
            catch (AggregateException e) when (e.InnerExceptions.OfType<PipelineException>().FirstOrDefault() is { } broken)
            {
                throw new PipelineException(broken.Message, e);
            }
        }

        void Work(int worker)
        {
            for (int i; (i = Interlocked.Increment(ref next)) < _lanes.Count;)
            {
                var lane = _lanes[i];
                var copy = _copies[worker][lane.Schema];
                copy.CopyFrom(batch.BySchema[lane.Schema]);
                lane.Run(copy);
            }
        }
    }

    private void CompareLabels()
    {
        var labels = _lanes[0].Labels;
        _match.Begin();
        for (int i = 0; i < labels.Count; i++)
        {
            ref readonly var label = ref CollectionsMarshal.AsSpan(labels)[i];
            if (!_match.TryFind(i, _logOdds))
            {
                LabelsLeftOut++;
                continue;
            }
            _comparer.Add(_logOdds, label.Label, label.Weight, label.ScoredAtMicroseconds, label.KnownAtMicroseconds, []);
            VariantLosses.Compute(_logOdds, _probabilities, _unused, _unused);
            for (int v = 0; v < _decisions.Length; v++) _decisions[v].Add(_logOdds[v], _probabilities[v], label.Label, label.Weight);
        }
        _baselines?.Take(labels);
    }
}
