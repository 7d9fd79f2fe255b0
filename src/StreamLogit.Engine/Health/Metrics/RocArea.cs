namespace StreamLogit.Engine.Health.Metrics;

/// <summary>
/// The area under the receiver operating characteristic: the probability that a label 1, drawn at random, was given a higher probability than a
/// label 0, ties counted as half.
/// </summary>
/// <param name="Area">The area, 0 to 1; NaN unless there are labels of both kinds.</param>
/// <param name="ErrorBound">
/// How far the area of the single labels can be from this one because labels in the same bin count as ties: half the share of pairs that share a
/// bin. 0 where groups hold equal probabilities only.
/// </param>
/// <param name="DeLongVariance">The variance by DeLong, DeLong &amp; Clarke-Pearson, Biometrics 44 (1988) 837.</param>
/// <param name="HanleyMcNeilVariance">
/// The variance by Hanley &amp; McNeil, Radiology 143 (1982) 29, with their exponential approximation Q1 = A/(2 - A), Q2 = 2A^2/(1 + A).
/// </param>
/// <remarks>With weights, each kind of label counts for as many as its effective number (sum of weights)^2 / (sum of squared weights).</remarks>
public readonly record struct RocArea(double Area, double ErrorBound, double DeLongVariance, double HanleyMcNeilVariance)
{
    /// <summary>The 95 % interval with DeLong's variance, cut to 0 to 1.</summary>
    public Interval DeLongInterval => IntervalOf(DeLongVariance);

    /// <summary>The 95 % interval with Hanley and McNeil's variance, cut to 0 to 1.</summary>
    public Interval HanleyMcNeilInterval => IntervalOf(HanleyMcNeilVariance);

    /// <summary>The area over groups from the lowest probability to the highest.</summary>
    public static RocArea Of(ReadOnlySpan<ScoreGroup> groups)
    {
        double positives = 0, negatives = 0, weight = 0, squaredWeight = 0;
        foreach (ref readonly var group in groups)
        {
            positives += group.Positive;
            negatives += group.Negative;
            weight += group.Weight;
            squaredWeight += group.SquaredWeight;
        }
        if (!(positives > 0 && negatives > 0)) return new RocArea(double.NaN, double.NaN, double.NaN, double.NaN);

        double pairs = positives * negatives;
        double won = 0, tiedInBins = 0, negativesBelow = 0;
        foreach (ref readonly var group in groups)
        {
            won += group.Positive * (negativesBelow + group.Negative / 2);
            if (group.Width > 0) tiedInBins += group.Positive * group.Negative;
            negativesBelow += group.Negative;
        }
        double area = won / pairs;

        // The structural components: for each label, the share of the other kind that it is on the right side of.
        double ofPositives = 0, ofNegatives = 0, positivesAbove = positives;
        negativesBelow = 0;
        foreach (ref readonly var group in groups)
        {
            positivesAbove -= group.Positive;
            double fromPositive = (negativesBelow + group.Negative / 2) / negatives - area;
            double fromNegative = (positivesAbove + group.Positive / 2) / positives - area;
            ofPositives += group.Positive * (fromPositive * fromPositive);
            ofNegatives += group.Negative * (fromNegative * fromNegative);
            negativesBelow += group.Negative;
        }
        double labelsPerWeight = weight / squaredWeight; // 1 where all weights are
        double positiveLabels = positives * labelsPerWeight, negativeLabels = negatives * labelsPerWeight;
        double deLong = ofPositives / positives / (positiveLabels - 1) + ofNegatives / negatives / (negativeLabels - 1);
        return new RocArea(
            area,
            tiedInBins / pairs / 2,
            positiveLabels > 1 && negativeLabels > 1 ? deLong : double.NaN,
            HanleyMcNeil(area, positiveLabels, negativeLabels));
    }

    private static double HanleyMcNeil(double area, double positives, double negatives)
    {
        double q1 = area / (2 - area), q2 = 2 * area * area / (1 + area);
        return (area * (1 - area) + (positives - 1) * (q1 - area * area) + (negatives - 1) * (q2 - area * area)) / (positives * negatives);
    }

    private Interval IntervalOf(double variance) =>
        double.IsNaN(variance) ? Interval.None : Interval.Around(Area, NormalQuantiles.TwoSided95 * Math.Sqrt(variance)).Within(0, 1);
}
