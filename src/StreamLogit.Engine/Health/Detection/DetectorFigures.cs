namespace StreamLogit.Engine.Health.Detection;

/// <summary>How a change detector stands.</summary>
/// <param name="Name"><c>odds higher</c>, <c>odds lower</c> or <c>log-loss</c>.</param>
/// <param name="Statistic">Its present value: the CUSUM in nats, or the number of labels in the adaptive window.</param>
/// <param name="Threshold">The value at which it fires; NaN for the adaptive window, which has none.</param>
/// <param name="Fired">How often it has fired.</param>
public sealed record DetectorFigures(string Name, double Statistic, double Threshold, long Fired);
