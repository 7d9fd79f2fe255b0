using System.Collections.Immutable;
using System.Globalization;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>record</c>: where the parts that every record has stand in it.</summary>
internal static class RecordSection
{
    private const int ShortestLimitBytes = 64;
    private const int LongestLimitBytes = 1 << 26;
    private const int MostLabelValues = 1000;
    private const int DeepestLimit = 256;
    private const long ShortestAheadMicroseconds = 1_000_000;
    private const long LongestAheadMicroseconds = 36500L * 24 * 3600 * 1_000_000;

    public static RecordOptions Read(ValueReader? value, LabelOptions labels)
    {
        var defaults = new RecordOptions();
        if (value?.Object() is not { } section) return defaults;
        var id = section.Optional("id");
        var time = section.Optional("time");
        var timeFormat = section.Optional("timeFormat")?.OneOf(
            ("rfc3339", TimeFormat.Rfc3339), ("unix-seconds", TimeFormat.UnixSeconds), ("unix-milliseconds", TimeFormat.UnixMilliseconds));
        var label = section.Optional("label");
        var labelTime = section.Optional("labelTime");
        var weight = section.Optional("weight");
        var options = new RecordOptions
        {
            Id = id?.FieldPath() ?? defaults.Id,
            Time = time?.FieldPath() ?? defaults.Time,
            TimeFormat = timeFormat ?? defaults.TimeFormat,
            Label = label?.FieldPath() ?? defaults.Label,
            LabelTime = labelTime?.FieldPath(),
            Weight = weight?.FieldPath() ?? defaults.Weight,
            LabelValues = ReadLabelValues(section.Optional("labelValues"), labels) ?? defaults.LabelValues,
            MaximumBytes = section.Optional("maxBytes")?.Whole(ShortestLimitBytes, LongestLimitBytes) ?? defaults.MaximumBytes,
            MaximumDepth = section.Optional("maxDepth")?.Whole(1, DeepestLimit) ?? defaults.MaximumDepth,
            AheadMicroseconds = section.Optional("ahead")?.Duration(ShortestAheadMicroseconds, LongestAheadMicroseconds) ?? defaults.AheadMicroseconds,
        };
        section.End();
        RefuseSharedFields(
        [
            ("id", options.Id, id), ("time", options.Time, time), ("label", options.Label, label),
            ("labelTime", options.LabelTime, labelTime), ("weight", options.Weight, weight),
        ]);
        return options;
    }

    private static void RefuseSharedFields((string Key, string? Field, ValueReader? Written)[] parts)
    {
        for (int later = 1; later < parts.Length; later++)
        {
            for (int earlier = 0; earlier < later; earlier++)
            {
                if (parts[later].Field is not { } field || field != parts[earlier].Field) continue;
                bool laterWritten = parts[later].Written is not null;
                string other = parts[laterWritten ? earlier : later].Key;
                parts[laterWritten ? later : earlier].Written?.Error(
                    $"the field {Quoted.Text(field)} is already that of {Quoted.Text(other)}: name another");
            }
        }
    }

    private static ImmutableDictionary<string, int>? ReadLabelValues(ValueReader? value, LabelOptions labels)
    {
        if (value?.Object() is not { } section) return null;
        if (value.Value.Members.Length > MostLabelValues)
        {
            value.Error($"expected at most {MostLabelValues} values, found {value.Value.Members.Length}");
            return null;
        }
        var meanings = new Dictionary<string, int>(StringComparer.Ordinal);
        var numbers = new Dictionary<double, (string Key, int Meaning)>();
        bool right = true;
        foreach (var (key, meaning) in section.Own())
        {
            if (meaning.Whole(0, 1) is not { } label)
            {
                right = false;
                continue;
            }
            meanings[key] = label;
            if (!NumberText.IsNumber(key)) continue;
            double number = double.Parse(key, NumberStyles.Float, CultureInfo.InvariantCulture);
            if (!numbers.TryAdd(number, (key, label)) && numbers[number] is var (other, otherLabel) && otherLabel != label)
            {
                meaning.Error($"the same number as {Quoted.Text(other)}, which means {otherLabel}: a number has one meaning");
            }
        }
        section.End();
        if (right && !meanings.ContainsValue(1)) value.Error("no value means 1: name the values of bad events, as { \"fraud\": 1, \"paid\": 0 }");
        if (right && !meanings.ContainsValue(0) && labels.Unlabelled != UnlabelledEvents.Negative)
        {
            value.Error("no value means 0: name the values of good events, or set labels.unlabelled to \"negative\"");
        }
        return meanings.ToImmutableDictionary(StringComparer.Ordinal);
    }
}
