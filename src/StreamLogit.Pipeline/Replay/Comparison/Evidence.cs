namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>
/// An anytime-valid e-value: if the claim is false, the chance that it ever reaches 1/a is at most a, however often anybody looks (Ville's inequality).
/// </summary>
/// <param name="LogEValue">Its natural logarithm now.</param>
/// <param name="LogPeak">The largest that it has been, 0 or more.</param>
/// <param name="ReachedTwentyAtMicroseconds">When it first reached 20, the level of 5 %, in microseconds since 1970; null if it never has.</param>
public readonly record struct Evidence(double LogEValue, double LogPeak, long? ReachedTwentyAtMicroseconds)
{
    /// <summary>The e-value now; infinity where it is too large for a number.</summary>
    public double EValue => Math.Exp(LogEValue);

    /// <summary>The chance, at most, of a peak as high if the claim is false: an anytime-valid p-value.</summary>
    public double PValue => Math.Exp(-LogPeak);
}
