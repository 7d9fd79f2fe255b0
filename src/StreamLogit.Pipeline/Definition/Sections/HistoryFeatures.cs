using System.Collections.Immutable;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>Features of the kind <c>history</c>: one for every half-life of the list.</summary>
internal static class HistoryFeatures
{
    private const int MostHalfLives = 16;
    private const long ShortestMicroseconds = 1_000_000;
    private const long LongestMicroseconds = 36_525L * 24 * 3600 * 1_000_000;
    private const int FewestValues = 8;
    private const int MostValues = 1024;

    private static readonly HistoryKind[] OfNumber = [HistoryKind.Sum, HistoryKind.Mean, HistoryKind.Deviation];
    private static readonly HistoryKind[] OfValue = [HistoryKind.Distinct, HistoryKind.New];
    private static readonly HistoryKind[] WithoutHalfLife = [HistoryKind.Gap, HistoryKind.New];

    /// <param name="section">The feature.</param>
    /// <param name="value">Its kind of history.</param>
    /// <param name="labels">How long labels are waited for, which is how long a pair is not new where nothing else is said.</param>
    /// <param name="field">Reads the path of a field that a feature may use.</param>
    /// <param name="fields">Reads such a path, or a list of them.</param>
    public static IEnumerable<HistoryFeature> Read(
        ObjectReader section, ValueReader value, LabelOptions labels, Func<ValueReader, string?> field, Func<ValueReader, ImmutableArray<string>?> fields)
    {
        var kind = value.OneOf(
            ("count", HistoryKind.Count), ("sum", HistoryKind.Sum), ("mean", HistoryKind.Mean), ("deviation", HistoryKind.Deviation),
            ("gap", HistoryKind.Gap), ("distinct", HistoryKind.Distinct), ("new", HistoryKind.New), ("rate", HistoryKind.Rate));
        var per = section.Required("per", "the field whose values have a history each, or a list of fields");
        var of = section.Optional("of");
        var halfLife = section.Optional("halfLife");
        var within = section.Optional("within");
        var scale = section.Optional("scale");
        var prior = section.Optional("prior");
        var values = section.Optional("values");
        var keys = per is null ? null : fields(per);
        if (kind is null || keys is null) return [];

        string name = value.Value.Text;
        bool isOf = OfNumber.Contains(kind.Value) || OfValue.Contains(kind.Value);
        bool isRight = Fits(of, isOf, "of", OfNumber.Contains(kind.Value) ? "the numeric field that it looks at" : "the field that it looks at")
            & Fits(halfLife, !WithoutHalfLife.Contains(kind.Value), "halfLife", "the time in which the weight of an event halves, as \"1h\", or a list of them")
            & Fits(within, kind == HistoryKind.New, "within", null)
            & Fits(prior, kind == HistoryKind.Rate, "prior", null)
            & Fits(values, kind == HistoryKind.Distinct, "values", null);
        string? ofField = of is null ? null : field(of);
        if (ofField is not null && keys.Value.Contains(ofField))
        {
            of!.Error($"the field {Quoted.Text(ofField)} is a part of the key, in whose history it is always the same: name another");
            isRight = false;
        }
        var feature = new HistoryFeature(kind.Value, keys.Value) { Of = ofField };
        feature = feature with
        {
            Scale = ReadScale(scale, kind.Value) ?? feature.Scale,
            Prior = prior?.Number(NumberRange.Positive) ?? feature.Prior,
            Values = values?.Whole(FewestValues, MostValues) ?? feature.Values,
        };
        if (!isRight || (isOf && ofField is null)) return [];
        if (kind == HistoryKind.Gap) return [feature];
        if (kind == HistoryKind.New) return ReadWithin(feature, within, labels);
        return ReadHalfLives(feature, halfLife!);

        bool Fits(ValueReader? given, bool isTaken, string key, string? purpose)
        {
            if (given is not null && !isTaken) given.Error($"a history of the kind {Quoted.Text(name)} takes no {Quoted.Text(key)}: leave it out");
            if (given is null && isTaken && purpose is not null) section.Error($"the key {Quoted.Text(key)} is missing: {purpose}");
            return isTaken ? given is not null || purpose is null : given is null;
        }
    }

    private static NumberScale? ReadScale(ValueReader? scale, HistoryKind kind)
    {
        if (scale is null) return null;
        (string, NumberScale)[] known =
            [("none", NumberScale.None), ("log1p", NumberScale.Log1p), ("standard", NumberScale.Standard), ("standard-log1p", NumberScale.StandardLog1p), ("rank", NumberScale.Rank), ("log-odds", NumberScale.LogOdds)];
        var read = scale.OneOf(known);
        if (read != NumberScale.LogOdds || kind == HistoryKind.Rate) return read;
        scale.Error("only a history of the kind \"rate\" takes the scale \"log-odds\": name another");
        return null;
    }

    private static IEnumerable<HistoryFeature> ReadWithin(HistoryFeature feature, ValueReader? within, LabelOptions labels)
    {
        if (within is null) return [feature with { WithinMicroseconds = labels.WaitMicroseconds, Span = DurationText.Format(labels.WaitMicroseconds) }];
        return within.Duration(ShortestMicroseconds, LongestMicroseconds) is { } read
            ? [feature with { WithinMicroseconds = read, Span = within.Value.Text }]
            : [];
    }

    private static List<HistoryFeature> ReadHalfLives(HistoryFeature feature, ValueReader halfLife)
    {
        var features = new List<HistoryFeature>();
        foreach (var item in halfLife.OneOrList("durations", MostHalfLives) ?? [])
        {
            if (item.Duration(ShortestMicroseconds, LongestMicroseconds) is not { } length) continue;
            if (features.Find(other => other.HalfLifeMicroseconds == length) is { } same)
                item.Error($"the half-life {Quoted.Text(same.Span)} is as long: keep one");
            else
                features.Add(feature with { HalfLifeMicroseconds = length, Span = item.Value.Text });
        }
        return features;
    }
}
