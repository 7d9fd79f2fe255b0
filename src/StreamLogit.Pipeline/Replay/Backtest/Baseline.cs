using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>Compares one baseline with the reference on the labels for which it has a probability.</summary>
internal sealed class Baseline
{
    private readonly string _name;
    private readonly VariantComparer _comparer;
    private readonly DecisionTally _decisions;
    private readonly double[] _logOdds = new double[2];

    public Baseline(string name, string reference, ComparisonOptions options)
    {
        _name = name;
        _comparer = new VariantComparer([reference, name], options);
        _decisions = new DecisionTally(options.Cost.Cutoff);
    }

    /// <summary>Takes a label; nothing where the baseline's log-odds is NaN.</summary>
    public void Add(in TapedLabel label, double logOdds)
    {
        if (double.IsNaN(logOdds)) return;
        (_logOdds[0], _logOdds[1]) = (label.LogOdds, logOdds);
        _comparer.Add(_logOdds, label.Label, label.Weight, label.ScoredAtMicroseconds, label.KnownAtMicroseconds, []);
        _decisions.Add(logOdds, 1 / (1 + Math.Exp(-logOdds)), label.Label, label.Weight);
    }

    public BaselineResult Result() => new(_name, _comparer.Result(), _decisions.ToFigures());
}
