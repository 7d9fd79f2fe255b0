using System.Globalization;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Health.Alarms;

/// <summary>What an alarm says, in plain words with its numbers.</summary>
internal static class AlarmSentence
{
    /// <summary>The metric against its bound.</summary>
    public static string Of(AlarmOptions alarm, in AlarmReading reading, bool isBeyond)
    {
        string place = (isBeyond, alarm.IsAbove) switch
        {
            (true, true) => "above",
            (true, false) => "below",
            (false, true) => "not above",
            (false, false) => "not below",
        };
        return string.Create(CultureInfo.InvariantCulture,
            $"{Subject(alarm, reading)} over {alarm.Window.Name} is {Number(alarm.Metric, reading.Value)}, {place} {Number(alarm.Metric, alarm.Bound)} ({Counted(alarm, reading)}){Details(reading)}.");
    }

    /// <summary>Too little happened to tell.</summary>
    public static string TooFew(AlarmOptions alarm, in AlarmReading reading, bool isRaised)
    {
        string kept = isRaised ? "it stays raised" : "it stays quiet";
        return reading.Count < alarm.Minimum
            ? string.Create(CultureInfo.InvariantCulture, $"{Subject(alarm, reading)} over {alarm.Window.Name} cannot be told from {Counted(alarm, reading)}, {alarm.Minimum:N0} are asked for; {kept}.")
            : string.Create(CultureInfo.InvariantCulture, $"{Subject(alarm, reading)} over {alarm.Window.Name} cannot be told ({Counted(alarm, reading)}); {kept}.");
    }

    public static string NotLookedAt(AlarmOptions alarm) => $"{Subject(alarm, default)} over {alarm.Window.Name} has not been looked at yet.";

    /// <summary>Whether a metric is counted over events instead of labels.</summary>
    public static bool IsOfEvents(AlarmMetric metric) => metric is AlarmMetric.AlertRate or AlarmMetric.Events or AlarmMetric.RejectShare
        or AlarmMetric.Drift or AlarmMetric.MissingShare or AlarmMetric.UnseenShare;

    private static string Subject(AlarmOptions alarm, in AlarmReading reading)
    {
        string words = alarm.Metric switch
        {
            AlarmMetric.LogLoss => "Log-loss",
            AlarmMetric.LogLossRatio => "Log-loss relative to the base rate",
            AlarmMetric.Brier => "Brier score",
            AlarmMetric.ObservedToExpected => "Bad outcomes that came for each one promised",
            AlarmMetric.SpiegelhalterZ => "Spiegelhalter's Z",
            AlarmMetric.CalibrationError => "Expected calibration error",
            AlarmMetric.CalibrationIntercept => "Calibration intercept",
            AlarmMetric.CalibrationSlope => "Calibration slope",
            AlarmMetric.Auc => "Area under the curve",
            AlarmMetric.LabelRate => "Share of bad labels",
            AlarmMetric.MeanProbability => "Mean published probability",
            AlarmMetric.Precision => "Share of alerts that were bad",
            AlarmMetric.Recall => "Share of bad outcomes that were alerts",
            AlarmMetric.AlertRate => "Share of events that are alerts",
            AlarmMetric.Events => "Number of events",
            AlarmMetric.Labels => "Number of labels",
            AlarmMetric.RejectShare => "Share of records rejected",
            AlarmMetric.LabelDelaySeconds => "Median wait for a label, in seconds,",
            AlarmMetric.Drift => "Population stability index",
            AlarmMetric.MissingShare => "Share of missing values",
            AlarmMetric.UnseenShare => "Share of values never seen before",
            _ => "Number of changes found",
        };
        string? feature = alarm.Metric is AlarmMetric.Drift or AlarmMetric.MissingShare or AlarmMetric.UnseenShare ? reading.Subject : null;
        if (!string.IsNullOrEmpty(feature)) words += $" of {feature}";
        return alarm.SliceField is null ? words : $"{words} where {alarm.SliceField} is {alarm.SliceValue}";
    }

    private static string Details(in AlarmReading reading) =>
        reading.Subject is { } subject && subject.EndsWith('.') ? ": " + subject[..^1] : "";

    private static string Counted(AlarmOptions alarm, in AlarmReading reading) =>
        string.Create(CultureInfo.InvariantCulture, $"{reading.Count:N0} {(IsOfEvents(alarm.Metric) ? "events" : "labels")}");

    private static string Number(AlarmMetric metric, double value) => metric switch
    {
        AlarmMetric.Events or AlarmMetric.Labels or AlarmMetric.Changes or AlarmMetric.LabelDelaySeconds => value.ToString("N0", CultureInfo.InvariantCulture),
        AlarmMetric.LabelRate or AlarmMetric.MeanProbability or AlarmMetric.Precision or AlarmMetric.Recall or AlarmMetric.AlertRate
            or AlarmMetric.RejectShare or AlarmMetric.MissingShare or AlarmMetric.UnseenShare => value.ToString("0.##%", CultureInfo.InvariantCulture),
        _ => value.ToString("0.####", CultureInfo.InvariantCulture),
    };
}
