using System.Collections.Immutable;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>The rules by which labels are taken together into groups of neighbouring probabilities.</summary>
public static class Grouping
{
    /// <summary>
    /// About equal counts: group k of m takes the score groups whose middle lies within the k-th m-th of the total weight. No score group is split,
    /// so groups of equal or binned probabilities may be fewer than asked for, and uneven.
    /// </summary>
    public static ImmutableArray<CalibrationGroup> EqualCount(ReadOnlySpan<ScoreGroup> groups, int count) =>
        ByShare(groups, count, static group => group.Weight);

    /// <summary>
    /// About equal numbers of positives promised, which suits rare events: equal counts would put all that matters into the last group.
    /// </summary>
    public static ImmutableArray<CalibrationGroup> EqualExpected(ReadOnlySpan<ScoreGroup> groups, int count) =>
        ByShare(groups, count, static group => group.Probability);

    /// <summary>Equal widths: group k of m holds the probabilities from k/m to below (k + 1)/m; 1 belongs to the last one.</summary>
    public static ImmutableArray<CalibrationGroup> EqualWidth(ReadOnlySpan<ScoreGroup> groups, int count)
    {
        var builder = new CalibrationGroups();
        foreach (ref readonly var group in groups)
            builder.Add(Math.Min((int)(group.MeanProbability * count), count - 1), group);
        return builder.Take();
    }

    /// <summary>
    /// Between sample quantiles of the probabilities at 0, 1/m ... 1, each group open below and closed above, the first closed on both sides; quantiles that
    /// are equal count once. Quantiles lie on or midway between two sorted values (type 2 of Hyndman &amp; Fan, The American Statistician 50, 1996, 361).
    /// </summary>
    /// <remarks>For groups of equal probabilities whose labels count once each.</remarks>
    public static ImmutableArray<CalibrationGroup> QuantilesType2(ReadOnlySpan<ScoreGroup> groups, int count)
    {
        var order = new OrderStatistics(groups);
        var cuts = new double[count + 1];
        for (int k = 0; k <= count; k++)
        {
            long whole = Math.DivRem((long)order.Count * k, count, out long rest);
            cuts[k] = rest != 0 ? order[whole + 1] : (order[Math.Max(whole, 1)] + order[Math.Min(whole + 1, order.Count)]) / 2;
        }
        // The extremes are the smallest and the largest value.
        cuts[0] = order[1];
        cuts[count] = order[order.Count];
        return Between(groups, cuts);
    }

    /// <summary>The same between quantiles that are interpolated linearly (type 7 of Hyndman &amp; Fan 1996).</summary>
    /// <remarks>For groups of equal probabilities whose labels count once each.</remarks>
    public static ImmutableArray<CalibrationGroup> QuantilesType7(ReadOnlySpan<ScoreGroup> groups, int count)
    {
        var order = new OrderStatistics(groups);
        var cuts = new double[count + 1];
        for (int k = 0; k <= count; k++)
        {
            long whole = Math.DivRem((order.Count - 1L) * k, count, out long rest);
            double low = order[whole + 1];
            double part = (double)rest / count;
            cuts[k] = rest == 0 ? low : (1 - part) * low + part * order[whole + 2];
        }
        return Between(groups, cuts);
    }

    private static ImmutableArray<CalibrationGroup> Between(ReadOnlySpan<ScoreGroup> groups, ReadOnlySpan<double> cuts)
    {
        var builder = new CalibrationGroups();
        int k = 1;
        foreach (ref readonly var group in groups)
        {
            while (k < cuts.Length - 1 && group.MeanProbability > cuts[k]) k++;
            builder.Add(k, group);
        }
        return builder.Take();
    }

    private static ImmutableArray<CalibrationGroup> ByShare(ReadOnlySpan<ScoreGroup> groups, int count, Func<ScoreGroup, double> shareOf)
    {
        double total = 0;
        foreach (ref readonly var group in groups) total += shareOf(group);
        var builder = new CalibrationGroups();
        double before = 0;
        foreach (ref readonly var group in groups)
        {
            double share = shareOf(group);
            builder.Add(total > 0 ? Math.Min((int)((before + share / 2) / total * count), count - 1) : 0, group);
            before += share;
        }
        return builder.Take();
    }
}
