using System.Runtime.CompilerServices;
using StreamLogit.Engine.Health.Metrics;
using StreamLogit.Engine.Health.RollUps;

namespace StreamLogit.Engine.Health;

/// <summary>
/// Fine bins of published log-odds: 1/32 wide between -8 and 8 (probabilities 0.0003 to 0.9997), 1/2 wide on to -40 and 40, one beyond on each side.
/// A bin's cell in a tally holds the sums of weight times probability, weight of labels 1, weight, and squared weight.
/// </summary>
internal static class LogOddsBins
{
    public const int Count = 2 * (1 + OuterBins + InnerBins);
    public const int CellWidth = 4;

    /// <summary>Beyond these log-odds, on both sides, all share a bin.</summary>
    public const double OuterEnd = 40;

    private const int InnerBins = 256; // on each side of 0
    private const int OuterBins = 64;
    private const double InnerEnd = 8;
    private const double InnerWidth = 1.0 / 32;
    private const double OuterWidth = 1.0 / 2;
    private const int Middle = 1 + OuterBins + InnerBins;

    /// <summary>The bin of finite log-odds.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static int Of(double logOdds)
    {
        // Bins are closed below: [k/32, (k + 1)/32).
        if (logOdds >= -InnerEnd && logOdds < InnerEnd) return (int)((logOdds + InnerEnd) * (1 / InnerWidth)) + (1 + OuterBins);
        return OfOuter(logOdds);
    }

    /// <summary>Where a bin starts and ends.</summary>
    public static Interval BoundsOf(int bin)
    {
        int fromMiddle = bin - Middle;
        if (fromMiddle < 0)
        {
            var mirrored = BoundsOf(Count - 1 - bin);
            return new Interval(-mirrored.High, -mirrored.Low);
        }
        if (fromMiddle < InnerBins) return new Interval(fromMiddle * InnerWidth, (fromMiddle + 1) * InnerWidth);
        double low = InnerEnd + (fromMiddle - InnerBins) * OuterWidth;
        return new Interval(low, fromMiddle == InnerBins + OuterBins ? double.PositiveInfinity : low + OuterWidth);
    }

    /// <summary>The score groups of the bins in use, from the lowest log-odds to the highest.</summary>
    public static ScoreGroup[] GroupsOf(Tally tally)
    {
        int count = 0;
        for (int bin = tally.NextUsed(0); bin >= 0 && bin < Count; bin = tally.NextUsed(bin + 1)) count++;
        var groups = new ScoreGroup[count];
        count = 0;
        for (int bin = tally.NextUsed(0); bin >= 0 && bin < Count; bin = tally.NextUsed(bin + 1))
        {
            var cell = tally[bin];
            if (cell[2] > 0) groups[count++] = GroupOf(bin, cell);
        }
        return count == groups.Length ? groups : groups[..count];
    }

    private static ScoreGroup GroupOf(int bin, ReadOnlySpan<double> cell)
    {
        var bounds = BoundsOf(bin);
        // Far out the mean probability rounds to 0 or 1, and what corrections take back leaves rounding behind.
        double logOdds = ScoreGroups.LogOdds(cell[0] / cell[2]);
        if (!(logOdds >= bounds.Low)) logOdds = bounds.Low;
        if (!(logOdds <= bounds.High)) logOdds = bounds.High;
        double width = bounds.High - bounds.Low;
        return new ScoreGroup(double.IsFinite(logOdds) ? logOdds : Math.CopySign(OuterEnd, logOdds), cell[2], cell[0], cell[1], cell[3], width);
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private static int OfOuter(double logOdds)
    {
        if (logOdds >= OuterEnd) return Count - 1;
        if (logOdds >= InnerEnd) return (int)((logOdds - InnerEnd) * (1 / OuterWidth)) + Middle + InnerBins;
        if (logOdds < -OuterEnd) return 0;
        return (int)((logOdds + OuterEnd) * (1 / OuterWidth)) + 1;
    }
}
