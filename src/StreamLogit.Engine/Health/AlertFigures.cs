using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Health;

/// <summary>How decisions at the cutoff did, over some labels.</summary>
/// <param name="Count">Labels of events whose decision was <c>alert</c>.</param>
/// <param name="Weight">The sum of their weights.</param>
/// <param name="Promised">The labels 1 that were promised of them, and those that came.</param>
/// <param name="Precision">The share of alerts whose label is 1.</param>
/// <param name="PrecisionInterval">Its 95 % interval (Wilson 1927).</param>
/// <param name="Recall">The share of labels 1 whose event was an alert.</param>
/// <param name="RecallInterval">Its 95 % interval (Wilson 1927).</param>
/// <param name="AlertRate">The share of labelled events that were alerts.</param>
public sealed record AlertFigures(
    long Count,
    double Weight,
    PromisedPositives Promised,
    double Precision,
    Interval PrecisionInterval,
    double Recall,
    Interval RecallInterval,
    double AlertRate)
{
    /// <summary>Of no labels.</summary>
    public static AlertFigures None { get; } = Of(new LabelSums());

    internal static AlertFigures Of(in LabelSums sums)
    {
        double precision = sums.AlertPositive / sums.AlertWeight, recall = sums.AlertPositive / sums.Positive;
        double alerts = sums.AlertWeight * sums.AlertWeight / sums.AlertSquaredWeight;
        double positives = sums.Positive * sums.Weight / sums.SquaredWeight; // their effective number
        return new AlertFigures(
            (long)sums.AlertCount,
            sums.AlertWeight,
            new PromisedPositives(sums.AlertProbability, sums.AlertVariance, sums.AlertPositive),
            precision,
            WilsonInterval.Of(Math.Clamp(precision, 0, 1), alerts),
            recall,
            WilsonInterval.Of(Math.Clamp(recall, 0, 1), positives),
            sums.AlertWeight / sums.Weight);
    }
}
