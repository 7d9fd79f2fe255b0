using System.Collections.Immutable;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>
/// The best non-decreasing fit by least squares, by pooling adjacent violators (Ayer, Brunk, Ewing, Reid &amp; Silverman, Annals of Mathematical
/// Statistics 26, 1955, 641): the observed rates that the order of the probabilities allows.
/// </summary>
public static class IsotonicFit
{
    /// <summary>The fitted value of each of a sequence of observations.</summary>
    /// <param name="values">The observations in the order along which the fit may not fall.</param>
    /// <param name="weights">Their weights, above 0, or nothing where each counts once.</param>
    public static double[] Of(ReadOnlySpan<double> values, ReadOnlySpan<double> weights = default)
    {
        var sums = new double[values.Length];
        var totals = new double[values.Length];
        var ends = new int[values.Length];
        int blocks = 0;
        for (int i = 0; i < values.Length; i++)
        {
            double weight = weights.IsEmpty ? 1 : weights[i];
            (sums[blocks], totals[blocks], ends[blocks]) = (weight * values[i], weight, i + 1);
            // A block that is not above the one before it is pooled with it.
            while (blocks > 0 && sums[blocks - 1] * totals[blocks] >= sums[blocks] * totals[blocks - 1])
            {
                blocks--;
                sums[blocks] += sums[blocks + 1];
                totals[blocks] += totals[blocks + 1];
                ends[blocks] = ends[blocks + 1];
            }
            blocks++;
        }
        var fitted = new double[values.Length];
        for (int block = 0, start = 0; block < blocks; start = ends[block], block++)
            fitted.AsSpan(start, ends[block] - start).Fill(sums[block] / totals[block]);
        return fitted;
    }

    /// <summary>The fit to score groups: one calibration group for each block of equal fitted rate, so a reliability diagram without chosen bins.</summary>
    public static ImmutableArray<CalibrationGroup> Of(ReadOnlySpan<ScoreGroup> groups)
    {
        var rates = new double[groups.Length];
        var weights = new double[groups.Length];
        for (int i = 0; i < groups.Length; i++) (rates[i], weights[i]) = (groups[i].Positive / groups[i].Weight, groups[i].Weight);
        double[] fitted = Of(rates, weights);
        var blocks = new CalibrationGroups();
        int number = 0;
        for (int i = 0; i < groups.Length; i++)
        {
            if (i > 0 && fitted[i] != fitted[i - 1]) number++;
            blocks.Add(number, groups[i]);
        }
        return blocks.Take();
    }
}
