using System.Collections.Immutable;
using System.Text.Json;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>features</c>: what the model sees of an event.</summary>
internal static class FeaturesSection
{
    private const int MostFeatures = 1000;
    private const int MostCrossedFields = 16;
    private const long ShortestPeriodMicroseconds = 1_000;
    private const long LongestPeriodMicroseconds = 36_525L * 24 * 3600 * 1_000_000;

    /// <summary>The features, or null and errors.</summary>
    public static ImmutableArray<FeatureOptions>? Read(ValueReader? value, RecordOptions record, LabelOptions labels)
    {
        if (value?.List("features", MostFeatures) is not { } items) return null;
        var features = ImmutableArray.CreateBuilder<FeatureOptions>();
        var paths = new Dictionary<string, string>(StringComparer.Ordinal);
        bool isRight = true;
        foreach (var item in items)
        {
            int before = features.Count;
            foreach (var feature in ReadFeatures(item, record, labels))
            {
                string identity = IdentityOf(feature);
                if (!paths.TryAdd(identity, item.Path))
                {
                    item.Error($"is the same feature as {paths[identity]}: keep one");
                    isRight = false;
                }
                features.Add(feature);
            }
            isRight &= features.Count > before;
        }
        return isRight ? features.ToImmutable() : null;
    }

    // What two features share when their coefficients would have the same names, or always the same values.
    private static string IdentityOf(FeatureOptions feature) => feature switch
    {
        HistoryFeature history => FormattableString.Invariant(
            $"{history.Kind} of {history.Of} per {string.Join(" & ", history.Per)} {history.HalfLifeMicroseconds} {history.WithinMicroseconds}"),
        TimeCycleFeature cycle => FormattableString.Invariant($"time of {cycle.PeriodMicroseconds}"),
        _ => $"{feature.GetType().Name} {feature.Name}",
    };

    private static IEnumerable<FeatureOptions> ReadFeatures(ValueReader item, RecordOptions record, LabelOptions labels)
    {
        if (item.Object() is not { } section) return [];
        if (section.Kind("feature", "number", "category", "cycle", "history", "bucket", "text") is not var (kind, field)) return [];
        IEnumerable<FeatureOptions?> features = kind switch
        {
            "number" => [ReadNumber(section, field, record)],
            "category" => [ReadFields(field, record) is { } fields ? new CategoryFeature(fields) : null],
            "history" => HistoryFeatures.Read(section, field, labels, value => Field(value, record), value => ReadFields(value, record)),
            "bucket" => [BucketFeatures.Read(section, Field(field, record))],
            "text" => [TextFeatures.Read(section, Field(field, record))],
            _ => [ReadCycle(section, field, record)],
        };
        long? forget = section.Optional("forget")?.Duration(UpdateRules.ShortestForgetMicroseconds, UpdateRules.LongestForgetMicroseconds);
        section.End();
        return features.OfType<FeatureOptions>().Select(feature => feature with { ForgetHalfLifeMicroseconds = forget ?? 0 });
    }

    private static NumberFeature? ReadNumber(ObjectReader section, ValueReader value, RecordOptions record)
    {
        string? field = Field(value, record);
        var scale = NumberScale.None;
        if (section.Optional("scale") is { } written)
        {
            var read = written.OneOf(("none", NumberScale.None), ("log1p", NumberScale.Log1p), ("standard", NumberScale.Standard), ("standard-log1p", NumberScale.StandardLog1p), ("rank", NumberScale.Rank));
            if (read is null) return null;
            scale = read.Value;
        }
        return field is null ? null : new NumberFeature(field, scale);
    }

    private static ImmutableArray<string>? ReadFields(ValueReader value, RecordOptions record)
    {
        if (value.OneOrList("paths of fields", MostCrossedFields) is not { } items) return null;
        var fields = ImmutableArray.CreateBuilder<string>();
        foreach (var item in items)
        {
            if (Field(item, record) is not { } field) continue;
            if (fields.Contains(field)) item.Error($"the field {Quoted.Text(field)} is there twice: keep one");
            else fields.Add(field);
        }
        return fields.Count == items.Length ? fields.ToImmutable() : null;
    }

    private static FeatureOptions? ReadCycle(ObjectReader section, ValueReader value, RecordOptions record)
    {
        string? field = Field(value, record);
        var period = section.Required("period", "how long the cycle is, a duration for the time of the event or a number for another field");
        if (field is null || period is null) return null;
        if (field == record.Time)
        {
            return period.Duration(ShortestPeriodMicroseconds, LongestPeriodMicroseconds) is { } microseconds
                ? new TimeCycleFeature(microseconds, period.Value.Text)
                : null;
        }
        if (period.Value.Kind == JsonValueKind.String)
        {
            period.Error($"expected a number in the unit of the field, found {period.Value.Describe()}; only the time of the event, {Quoted.Text(record.Time)}, takes a duration");
            return null;
        }
        return period.Number(NumberRange.Positive) is { } length ? new NumberCycleFeature(field, length) : null;
    }

    private static string? Field(ValueReader value, RecordOptions record)
    {
        string? field = value.FieldPath();
        if (field is null || field != record.Label && field != record.LabelTime) return field;
        value.Error($"the field {Quoted.Text(field)} holds the label{(field == record.Label ? "" : "'s time")}, which is not known when an event is scored: name another");
        return null;
    }
}
