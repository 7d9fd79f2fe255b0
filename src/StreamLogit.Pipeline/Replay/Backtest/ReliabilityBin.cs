namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>Labels whose probabilities were about the same.</summary>
/// <param name="Count">Labels.</param>
/// <param name="Weight">Their weight.</param>
/// <param name="MeanProbability">Their mean probability.</param>
/// <param name="ObservedRate">The weighted share of ones among them.</param>
public readonly record struct ReliabilityBin(long Count, double Weight, double MeanProbability, double ObservedRate);
