using System.Collections.Immutable;
using System.Globalization;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>health</c>: how the published probabilities are checked.</summary>
internal static class HealthSection
{
    private const long MinuteMicroseconds = 60_000_000;
    private const long HourMicroseconds = 60 * MinuteMicroseconds;
    private const long DayMicroseconds = 24 * HourMicroseconds;
    private const long LongestWindowMicroseconds = 366 * DayMicroseconds;
    private const int MostWindows = 16;
    private const int MostLabels = 1_000_000;
    private const int MostSlices = 4;
    private const int MostSliceValues = 62;
    private const int FewestLabelsPerFalseAlarm = 1_000;
    private const string TimeForm = "yyyy-MM-dd'T'HH:mm:ssK";

    public static HealthOptions Read(ValueReader? value, RecordOptions record, ImmutableArray<FeatureOptions> features)
    {
        var defaults = new HealthOptions();
        if (value?.Object() is not { } section) return defaults;
        var options = new HealthOptions
        {
            Windows = ReadWindows(section.Optional("windows")) ?? defaults.Windows,
            LastLabels = section.Optional("lastLabels")?.Whole(1, MostLabels) ?? defaults.LastLabels,
            Slices = ReadSlices(section.Optional("slices"), record) ?? defaults.Slices,
            SliceValues = section.Optional("sliceValues")?.Whole(1, MostSliceValues) ?? defaults.SliceValues,
            History = ReadHistory(section.Optional("history")),
            Reference = ReadReference(section.Optional("reference")),
            LabelsPerFalseAlarm = section.Optional("labelsPerFalseAlarm")?.Whole(FewestLabelsPerFalseAlarm, int.MaxValue) ?? defaults.LabelsPerFalseAlarm,
            DetectAfterLabels = section.Optional("detectAfterLabels")?.Whole(0, int.MaxValue) ?? defaults.DetectAfterLabels,
        };
        options = options with { Alarms = AlarmsSection.Read(section.Optional("alarms"), options, features) };
        section.End();
        return options;
    }

    private static ImmutableArray<HealthWindow>? ReadWindows(ValueReader? value)
    {
        if (value?.List("durations", MostWindows) is not { } items) return null;
        var windows = ImmutableArray.CreateBuilder<HealthWindow>();
        foreach (var item in items)
        {
            if (WholeMultiple(item, MinuteMicroseconds, MinuteMicroseconds, LongestWindowMicroseconds, "a window is a whole number of minutes") is not { } length) continue;
            if (windows.FirstOrDefault(window => window.LengthMicroseconds == length) is { } same)
            {
                item.Error($"the window {Quoted.Text(same.Name)} is as long: keep one");
                continue;
            }
            windows.Add(new HealthWindow(item.Value.Text, length));
        }
        return windows.ToImmutable();
    }

    private static ImmutableArray<string>? ReadSlices(ValueReader? value, RecordOptions record)
    {
        if (value?.List("paths of fields", MostSlices) is not { } items) return null;
        var slices = ImmutableArray.CreateBuilder<string>();
        foreach (var item in items)
        {
            if (item.FieldPath() is not { } field) continue;
            if (field == record.Label) item.Error($"the field {Quoted.Text(field)} holds the label, which is not known when an event is scored: name another");
            else if (slices.Contains(field)) item.Error($"the field {Quoted.Text(field)} is there twice: keep one");
            else slices.Add(field);
        }
        return slices.ToImmutable();
    }

    private static HealthHistoryOptions ReadHistory(ValueReader? value)
    {
        var defaults = new HealthHistoryOptions();
        if (value?.Object() is not { } section) return defaults;
        var history = new HealthHistoryOptions
        {
            Minutes = Count("minutes", MinuteMicroseconds, 60, 7 * 24 * 60) ?? defaults.Minutes,
            Hours = Count("hours", HourMicroseconds, 24, 366 * 24) ?? defaults.Hours,
            Days = Count("days", DayMicroseconds, 7, 3660) ?? defaults.Days,
        };
        section.End();
        return history;

        int? Count(string unit, long length, int fewest, int most) =>
            section.Optional(unit) is { } item && WholeMultiple(item, length, fewest * length, most * length, $"these are whole {unit}") is { } microseconds
                ? (int)(microseconds / length)
                : null;
    }

    private static HealthReferenceOptions ReadReference(ValueReader? value)
    {
        var defaults = new HealthReferenceOptions();
        if (value?.Object() is not { } section) return defaults;
        var reference = new HealthReferenceOptions
        {
            FromMicroseconds = ReadTime(section.Optional("from")),
            LengthMicroseconds = section.Optional("length") is { } length
                ? WholeMultiple(length, MinuteMicroseconds, HourMicroseconds, LongestWindowMicroseconds, "the length is a whole number of minutes") ?? defaults.LengthMicroseconds
                : defaults.LengthMicroseconds,
        };
        section.End();
        return reference;
    }

    private static long? ReadTime(ValueReader? value)
    {
        if (value?.Text() is not { } text) return null;
        if (DateTimeOffset.TryParseExact(text, TimeForm, CultureInfo.InvariantCulture, DateTimeStyles.AssumeUniversal, out var time) && time.Second == 0 && (text[^1] == 'Z' || text[^3] == ':'))
            return (time - DateTimeOffset.UnixEpoch).Ticks / TimeSpan.TicksPerMicrosecond;
        value.Error($"expected a date and a time at a full minute with an offset, as \"2026-03-01T00:00:00Z\", found {value.Value.Describe()}");
        return null;
    }

    private static long? WholeMultiple(ValueReader value, long unit, long shortest, long longest, string rule)
    {
        if (value.Duration(shortest, longest) is not { } length) return null;
        if (length % unit == 0) return length;
        value.Error($"{rule}, found {value.Value.Describe()}");
        return null;
    }
}
