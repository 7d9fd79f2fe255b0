using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>Something else that could have been used, against the definition as it stands, on the labels for which it had a probability.</summary>
/// <param name="Name">What it is.</param>
/// <param name="Comparison">The comparison, with the baseline as its only variant.</param>
/// <param name="Decisions">The baseline's decisions at the definition's cutoff.</param>
public sealed record BaselineResult(string Name, ComparisonResult Comparison, DecisionFigures Decisions);
