namespace StreamLogit.Engine.Health;

/// <summary>Where a label was counted, so that it can be taken back when it turns out to be wrong.</summary>
/// <param name="Minute">The minute of the stream's clock, counted from 1970.</param>
/// <param name="Sequence">Its number among all labels, which wraps.</param>
/// <param name="BaseRate">The probability of label 1 that the base rate gave before.</param>
/// <param name="Weight">The weight with which it was counted, to seven digits: there is one of these for every label that may still be corrected.</param>
internal readonly record struct LabelCount(int Minute, uint Sequence, double BaseRate, float Weight);
