using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health.Detection;
using StreamLogit.Engine.Health.Drift;
using StreamLogit.Engine.Health.Metrics;
using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Health.Slices;

namespace StreamLogit.Engine.Health.Alarms;

/// <summary>Reads the metrics that alarms look at, over windows that end with a minute.</summary>
/// <param name="stream">The sums of the whole stream.</param>
/// <param name="row">How they are laid out.</param>
/// <param name="slices">The sliced fields.</param>
/// <param name="drift">The drift of the features.</param>
/// <param name="detectors">The change detectors.</param>
internal sealed class AlarmMetrics(RollUp stream, HealthRow row, SlicedField[] slices, DriftLedger drift, ChangeDetectors detectors)
{
    private const long MicrosecondsOfMinute = 60_000_000;
    private const int CalibrationGroups = 10;

    private readonly double[] _numbers = new double[row.Numbers];
    private readonly Tally _tally = new(HealthRow.Cells, LogOddsBins.CellWidth);
    private readonly Tally _sliceTally = new(LogOddsBins.Count, LogOddsBins.CellWidth);

    public AlarmReading Read(AlarmOptions alarm, long lastMinute)
    {
        long minutes = alarm.Window.LengthMicroseconds / MicrosecondsOfMinute;
        long clock = (lastMinute + 1) * MicrosecondsOfMinute;
        Array.Clear(_numbers);
        var tally = alarm.SliceField is null ? _tally : _sliceTally;
        tally.Clear();
        var source = stream;
        if (alarm.SliceField is not null)
        {
            if (FindSlice(alarm) is not { } slice) return new AlarmReading(double.NaN, 0);
            source = slice;
        }
        source.Window(lastMinute, minutes, source == stream ? _numbers : _numbers.AsSpan(0, LabelSums.Numbers), tally);

        ref var labels = ref HealthRow.Labels(_numbers);
        ref var events = ref HealthRow.Stream(_numbers);
        if (!AlarmSentence.IsOfEvents(alarm.Metric) && alarm.Metric != AlarmMetric.Changes)
            return new AlarmReading(OfLabels(alarm.Metric, labels, tally), (long)labels.Count);

        long count = (long)events.Events;
        string? subject = null;
        double value = alarm.Metric switch
        {
            AlarmMetric.AlertRate => events.Alerts / events.Events,
            AlarmMetric.Events => events.Events,
            AlarmMetric.RejectShare => events.Rejects / (events.Rejects + events.Events),
            AlarmMetric.Drift => drift.PsiOf(alarm.Feature, lastMinute, minutes, clock, out subject),
            AlarmMetric.MissingShare => drift.LargestShare(ofUnseen: false, alarm.Feature, lastMinute, minutes, out subject),
            AlarmMetric.UnseenShare => drift.LargestShare(ofUnseen: true, alarm.Feature, lastMinute, minutes, out subject),
            _ => detectors.CountSince(clock - alarm.Window.LengthMicroseconds),
        };
        if (alarm.Metric != AlarmMetric.Changes) return new AlarmReading(value, count, subject);
        return new AlarmReading(value, (long)labels.Count, value > 0 ? detectors.Last?.Sentence : null);
    }

    private static double OfLabels(AlarmMetric metric, in LabelSums sums, Tally tally) => metric switch
    {
        AlarmMetric.LogLoss => sums.LogLoss / sums.Weight,
        AlarmMetric.LogLossRatio => sums.LogLoss / sums.BaseRateLogLoss,
        AlarmMetric.Brier => sums.Brier / sums.Weight,
        AlarmMetric.ObservedToExpected => sums.Positive / sums.Probability,
        AlarmMetric.SpiegelhalterZ => sums.SpiegelhalterNumerator / Math.Sqrt(sums.SpiegelhalterVariance),
        AlarmMetric.LabelRate => sums.Positive / sums.Weight,
        AlarmMetric.MeanProbability => sums.Probability / sums.Weight,
        AlarmMetric.Precision => sums.AlertPositive / sums.AlertWeight,
        AlarmMetric.Recall => sums.AlertPositive / sums.Positive,
        AlarmMetric.Labels => sums.Count,
        AlarmMetric.LabelDelaySeconds => StreamRow.Delays(tally).QuantileSeconds(0.5),
        AlarmMetric.Auc => RocArea.Of(LogOddsBins.GroupsOf(tally)).Area,
        AlarmMetric.CalibrationError => Metrics.CalibrationError.Of(Grouping.EqualCount(LogOddsBins.GroupsOf(tally), CalibrationGroups)).Expected,
        AlarmMetric.CalibrationIntercept => CoxCalibration.Of(LogOddsBins.GroupsOf(tally), sums.PositiveLogOdds).Intercept,
        AlarmMetric.CalibrationSlope => CoxCalibration.Of(LogOddsBins.GroupsOf(tally), sums.PositiveLogOdds).Slope,
        _ => double.NaN,
    };

    private RollUp? FindSlice(AlarmOptions alarm)
    {
        foreach (var field in slices)
        {
            if (field.Path != alarm.SliceField) continue;
            foreach (var series in field.Series)
                if (series.Text == alarm.SliceValue) return series.RollUp;
        }
        return null;
    }
}
