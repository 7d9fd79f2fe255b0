using System.Collections.Immutable;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>The metrics of alarms as definitions write them.</summary>
internal static class AlarmMetricNames
{
    /// <summary>Every metric with its name: that of the engine with a small first letter.</summary>
    public static ImmutableArray<(string Name, AlarmMetric Metric)> All { get; } = [.. Enum.GetValues<AlarmMetric>().Select(metric => (Of(metric), metric))];

    public static string Of(AlarmMetric metric)
    {
        string name = metric.ToString();
        return char.ToLowerInvariant(name[0]) + name[1..];
    }

    /// <summary>Whether a metric is told by labels, and so for every slice.</summary>
    public static bool IsOfLabels(AlarmMetric metric) => metric is not (AlarmMetric.AlertRate or AlarmMetric.Events or AlarmMetric.RejectShare
        or AlarmMetric.LabelDelaySeconds or AlarmMetric.Drift or AlarmMetric.MissingShare or AlarmMetric.UnseenShare or AlarmMetric.Changes);
}
