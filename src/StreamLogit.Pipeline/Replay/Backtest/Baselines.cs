using System.Collections.Immutable;
using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>What people would otherwise use: the base rate, a nightly refit, and the probabilities of a rival.</summary>
internal sealed class Baselines
{
    private readonly Baseline? _baseRate;
    private readonly Baseline? _nightly;
    private readonly Baseline? _rival;
    private double _ones;
    private double _labels;

    public Baselines(BacktestOptions options, ComparisonOptions comparison)
    {
        string reference = options.Reference.Name;
        if (options.Baselines)
        {
            Refit = new NightlyBaseline();
            _baseRate = new Baseline("base rate", reference, comparison);
            _nightly = new Baseline("nightly refit on 30 days", reference, comparison);
        }
        if (options.RivalField is null) return;
        Rival = new RivalProbabilities(options.Reference.Definition.Engine.Labels.WaitMicroseconds);
        _rival = new Baseline($"rival: {options.RivalField}", reference, comparison);
    }

    public NightlyBaseline? Refit { get; }

    public RivalProbabilities? Rival { get; }

    /// <summary>Takes the labels that the reference learned in a batch.</summary>
    public void Take(IReadOnlyList<TapedLabel> labels)
    {
        for (int i = 0; i < labels.Count; i++)
        {
            var label = labels[i];
            // Krichevsky-Trofimov, of all labels known before this one.
            _baseRate?.Add(label, Math.Log((_ones + 0.5) / (_labels - _ones + 0.5)));
            _ones += label.Weight * label.Label;
            _labels += label.Weight;
            _nightly?.Add(label, Refit!.LogOdds[i]);
            _rival?.Add(label, Rival!.LogOddsOf(label.IdHash));
        }
        Rival?.Forget();
    }

    public ImmutableArray<BaselineResult> Results() =>
        [.. new[] { _baseRate, _nightly, _rival }.OfType<Baseline>().Select(baseline => baseline.Result())];
}
