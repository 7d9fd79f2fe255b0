namespace StreamLogit.Engine.Health.Detection;

/// <summary>A change that a detector found in the published log-loss.</summary>
/// <param name="Number">Its number among all changes found, from 1.</param>
/// <param name="Detector"><c>odds higher</c>, <c>odds lower</c> or <c>log-loss</c>.</param>
/// <param name="AtMicroseconds">When it fired, on the stream's clock.</param>
/// <param name="AtLabel">How many labels had been learned then.</param>
/// <param name="SinceMicroseconds">When the change most likely began, on the stream's clock.</param>
/// <param name="SinceLabel">How many labels had been learned then.</param>
/// <param name="Before">What was before: the mean of the published log-loss (<c>log-loss</c>), or the mean published probability since the change (the others).</param>
/// <param name="After">What came after: the mean of the published log-loss, or the observed rate since the change.</param>
/// <param name="Sentence">The same in words.</param>
public sealed record DetectedChange(
    long Number,
    string Detector,
    long AtMicroseconds,
    long AtLabel,
    long SinceMicroseconds,
    long SinceLabel,
    double Before,
    double After,
    string Sentence);
