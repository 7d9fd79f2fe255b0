using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>Decides where variants stand, at a level of 5 % over all that were tried.</summary>
public static class Standings
{
    private static readonly double LogTwenty = Math.Log(20);

    /// <summary>
    /// The e-value that counts where so many were tried: 20 times their number (Bonferroni), so that the best of many is not taken for good by luck.
    /// </summary>
    public static double NeededEValue(int tried) => 20.0 * Math.Max(tried, 1);

    /// <summary>Where a variant stands: the evidence has been strong enough, and the interval of the whole recording agrees with it.</summary>
    /// <param name="variant">The variant.</param>
    /// <param name="tried">How many were tried together.</param>
    public static Standing Of(VariantComparison variant, int tried)
    {
        var difference = variant.Losses.LogLoss;
        double needed = LogTwenty + Math.Log(Math.Max(tried, 1));
        if (difference.Value < 0 && variant.Better.LogPeak >= needed && !(difference.High >= 0)) return Standing.Better;
        if (difference.Value > 0 && variant.Worse.LogPeak >= needed && !(difference.Low <= 0)) return Standing.Worse;
        return difference.Value == 0 && variant.Better.LogPeak == 0 && variant.Worse.LogPeak == 0 ? Standing.Same : Standing.Unclear;
    }

    /// <summary>The standing in words.</summary>
    public static string Words(this Standing standing) => standing switch
    {
        Standing.Better => "better",
        Standing.Worse => "worse",
        Standing.Same => "the same",
        _ => "unclear",
    };
}
