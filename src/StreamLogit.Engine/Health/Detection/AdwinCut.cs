namespace StreamLogit.Engine.Health.Detection;

/// <summary>A change that an adaptive window found: it was cut in two, and the older part was dropped.</summary>
/// <param name="MeanBefore">The mean of the older part.</param>
/// <param name="MeanAfter">The mean of the newer part.</param>
/// <param name="CountBefore">Observations in the older part.</param>
/// <param name="CountAfter">Observations in the newer part: the change came about so many ago.</param>
/// <param name="SinceMicroseconds">The time of the newer part's first observation.</param>
public readonly record struct AdwinCut(double MeanBefore, double MeanAfter, long CountBefore, long CountAfter, long SinceMicroseconds);
