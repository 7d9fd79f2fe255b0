using StreamLogit.Engine;
using StreamLogit.Engine.Fitting;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>What a logistic regression of the same features, refitted every midnight on the last 30 days, would have said of the labelled events of a batch.</summary>
internal sealed class NightlyBaseline
{
    private readonly NightlyRefit _refit = new(new NightlyRefitOptions());

    /// <summary>Its log-odds of the batch's labelled events; NaN before its first fit.</summary>
    public List<double> LogOdds { get; } = [];

    /// <summary>Fits made.</summary>
    public int Fits => _refit.Fits;

    public void Clear() => LogOdds.Clear();

    public void Take(in LabelledEvent labelled)
    {
        var x = labelled.Vector;
        long day = NightlyRefit.DayOf(labelled.ScoredAtMicroseconds);
        _refit.GoTo(NightlyRefit.DayOf(labelled.KnownAtMicroseconds));
        LogOdds.Add(_refit.LogOdds(in x, day));
        _refit.Learn(in x, labelled.Label, labelled.Weight, day);
    }
}
