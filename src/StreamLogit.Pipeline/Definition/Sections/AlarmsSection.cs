using System.Collections.Immutable;
using System.Globalization;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>health.alarms</c>: metrics with their bounds.</summary>
internal static class AlarmsSection
{
    private const int MostAlarms = 100;
    private const long LongestForMicroseconds = 366L * 24 * 3600 * 1_000_000;

    private static readonly NumberRange AnyNumber = new(double.MinValue, double.MaxValue, "a number");

    public static ImmutableArray<AlarmOptions> Read(ValueReader? value, HealthOptions health, ImmutableArray<FeatureOptions> features)
    {
        if (value?.List("alarms", MostAlarms) is not { } items) return [];
        var alarms = ImmutableArray.CreateBuilder<AlarmOptions>();
        var paths = new Dictionary<string, string>(StringComparer.Ordinal);
        foreach (var item in items)
        {
            if (ReadAlarm(item, health, features) is not { } alarm) continue;
            if (paths.TryAdd(alarm.Name, item.Path)) alarms.Add(alarm);
            else item.Error($"the alarm {Quoted.Text(alarm.Name)} is already at {paths[alarm.Name]}: give it another name");
        }
        return alarms.ToImmutable();
    }

    private static AlarmOptions? ReadAlarm(ValueReader item, HealthOptions health, ImmutableArray<FeatureOptions> features)
    {
        if (item.Object() is not { } section) return null;
        var defaults = new AlarmOptions { Name = "", Metric = default, Window = new HealthWindow("", 0), Bound = 0 };
        string? name = section.Optional("name")?.Text();
        var metric = ReadMetric(section.Required("metric", "it says what is looked at"));
        var window = ReadWindow(section.Required("window", "it names one of the windows"), health);
        var (bound, isAbove) = ReadBound(section);
        long minimum = section.Optional("minimum")?.Whole(0, int.MaxValue) ?? defaults.Minimum;
        long forMicroseconds = section.Optional("for")?.Duration(0, LongestForMicroseconds) ?? defaults.ForMicroseconds;
        string? feature = ReadFeature(section.Optional("feature"), metric, features);
        var (field, fieldValue) = ReadSlice(section.Optional("slice"), metric, health);
        section.End();
        if (metric is null || window is null || bound is null) return null;
        string subject = (feature is null ? "" : " of " + feature) + (field is null ? "" : $" where {field} is {fieldValue}");
        return new AlarmOptions
        {
            Name = name ?? string.Create(CultureInfo.InvariantCulture, $"{AlarmMetricNames.Of(metric.Value)}{subject} over {window.Name} {(isAbove ? "above" : "below")} {bound}"),
            Metric = metric.Value,
            Window = window,
            Bound = bound.Value,
            IsAbove = isAbove,
            Minimum = minimum,
            ForMicroseconds = forMicroseconds,
            Feature = feature,
            SliceField = field,
            SliceValue = fieldValue,
        };
    }

    private static AlarmMetric? ReadMetric(ValueReader? value) => value?.OneOf([.. AlarmMetricNames.All]);

    private static HealthWindow? ReadWindow(ValueReader? value, HealthOptions health) =>
        value?.OneOf([.. health.Windows.Select((window, index) => (window.Name, index))]) is { } index ? health.Windows[index] : null;

    private static (double? Bound, bool IsAbove) ReadBound(ObjectReader section)
    {
        ValueReader? above = section.Optional("above"), below = section.Optional("below");
        if (above is null == below is null)
        {
            section.Error(above is null ? "expected a bound, \"above\" or \"below\"" : "has both \"above\" and \"below\": write two alarms");
            return (null, true);
        }
        return ((above ?? below)!.Number(AnyNumber), above is not null);
    }

    private static string? ReadFeature(ValueReader? value, AlarmMetric? metric, ImmutableArray<FeatureOptions> features)
    {
        if (value is null) return null;
        if (metric is not (null or AlarmMetric.Drift or AlarmMetric.MissingShare or AlarmMetric.UnseenShare))
        {
            value.Error("only the metrics \"drift\", \"missingShare\" and \"unseenShare\" are of a feature");
            return null;
        }
        return value.OneOf([.. features.Select((feature, index) => (feature.Name, index))]) is { } index ? features[index].Name : null;
    }

    private static (string? Field, string? Value) ReadSlice(ValueReader? value, AlarmMetric? metric, HealthOptions health)
    {
        if (value?.Object() is not { } slice) return (null, null);
        var members = slice.Own().ToList();
        if (members.Count != 1 || !health.Slices.Contains(members[0].Key))
        {
            slice.Error($"expected one of the fields of slices with its value, as {{ \"channel\": \"app\" }}; sliced are {(health.Slices.IsEmpty ? "none" : Quoted.List(health.Slices))}");
            return (null, null);
        }
        if (metric is { } known && !AlarmMetricNames.IsOfLabels(known)) slice.Error("this metric is not told apart by slices");
        return (members[0].Key, members[0].Value.Text());
    }
}
