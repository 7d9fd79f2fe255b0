using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Options.Kafka;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Commands;

/// <summary>Says what a definition means.</summary>
internal static class DefinitionInWords
{
    /// <summary>The lines of the description.</summary>
    public static IEnumerable<string> Describe(StreamDefinition definition)
    {
        var engine = definition.Engine;
        yield return $"Stream: {engine.Stream}";
        yield return "";
        yield return "Records";
        foreach (string line in Records(engine.Record)) yield return $"  {line}";
        yield return "";
        yield return "Features";
        foreach (var feature in engine.Features) yield return $"  {feature.Name}: {Describe(feature)}{Forgetting(feature)}";
        yield return "";
        yield return "Learning";
        yield return $"  published: {engine.Learning.PublishedSetting ?? FormattableString.Invariant($"the blend of all settings, switch rate {engine.Learning.SwitchRate}")}";
        yield return definition.WarmStartPath is { } warmStart
            ? $"  without a state, every setting starts from the coefficients of {warmStart}"
            : FormattableString.Invariant($"  probability before anything is learned: {engine.Learning.StartProbability}");
        foreach (var setting in engine.Learning.Bank) yield return $"  setting: {setting.Name}";
        yield return "";
        yield return "Labels";
        string end = engine.Labels.Unlabelled == UnlabelledEvents.Negative ? "is then learned as 0" : "is then forgotten";
        yield return $"  an event waits {DurationText.Format(engine.Labels.WaitMicroseconds)} for its label and {end}";
        yield return "";
        yield return "Decision";
        yield return FormattableString.Invariant($"  alert from probability {engine.Decision.Cutoff} on; {engine.Decision.Reasons} reasons with a score");
        yield return "";
        yield return "Files and topics";
        foreach (string line in Files(definition)) yield return $"  {line}";
        if (definition.Listen is { } page)
        {
            yield return "";
            yield return "Page";
            yield return $"  {Describe(page)}";
        }
        yield return "";
        yield return "Memory";
        yield return $"  {Memory(engine)}";
    }

    private static IEnumerable<string> Records(RecordOptions record)
    {
        string format = record.TimeFormat switch
        {
            TimeFormat.UnixSeconds => "seconds since 1970",
            TimeFormat.UnixMilliseconds => "milliseconds since 1970",
            _ => "RFC 3339",
        };
        yield return $"id in {record.Id}; time in {record.Time}, {format}";
        var values = record.LabelValues.OrderBy(value => value.Key, StringComparer.Ordinal).Select(value => $"{value.Key} means {value.Value}");
        yield return $"label in {record.Label}: {string.Join(", ", values)}";
        if (record.LabelTime is { } labelTime) yield return $"time of the label in {labelTime}: the label teaches from then on";
        yield return $"weight in {record.Weight}, 1 where it is absent";
        yield return FormattableString.Invariant($"at most {record.MaximumBytes} bytes and {record.MaximumDepth} levels deep");
    }

    private static string Describe(FeatureOptions feature) => feature switch
    {
        NumberFeature { Scale: NumberScale.None } => "a number as it is; a coefficient of its own where it is missing",
        NumberFeature { Scale: NumberScale.Log1p } => "a number x as sign(x) ln(1 + |x|); a coefficient of its own where it is missing",
        NumberFeature { Scale: NumberScale.Rank } => "the rank of a number among those before, from -1 to 1; a coefficient of its own where it is missing",
        NumberFeature { Scale: NumberScale.StandardLog1p } =>
            "a number x as sign(x) ln(1 + |x|), less the running mean of that and over its running standard deviation; a coefficient of its own where it is missing",
        NumberFeature => "a number, less its running mean and over its running standard deviation; a coefficient of its own where it is missing",
        CategoryFeature { Fields.Length: 1 } => "a coefficient for every value, \"missing\" among them",
        CategoryFeature => "a coefficient for every combination of values",
        TimeCycleFeature => "the time of the event in its cycle, as sine and cosine",
        NumberCycleFeature => "a number in its cycle, as sine and cosine",
        HistoryFeature history => Describe(history),
        BucketFeature { Edges.IsEmpty: false } bucket => FormattableString.Invariant($"a coefficient for each bucket between the edges {string.Join(", ", bucket.Edges)}"),
        BucketFeature => "a coefficient for each bucket between running quantiles",
        TextFeature text => Describe(text),
        _ => feature.ToString(),
    };

    private static string Describe(HistoryFeature history)
    {
        string key = string.Join(" and ", history.Per);
        string what = history.Kind switch
        {
            HistoryKind.Count => $"the number of earlier events of the same {key}",
            HistoryKind.Sum => $"the sum of {history.Of} over earlier events of the same {key}",
            HistoryKind.Mean => $"the mean of {history.Of} over earlier events of the same {key}",
            HistoryKind.Deviation => $"how far {history.Of} is from its mean over earlier events of the same {key}, in standard deviations",
            HistoryKind.Gap => $"the seconds since the last event of the same {key}",
            HistoryKind.Distinct => $"the number of different values of {history.Of} among earlier events of the same {key}",
            HistoryKind.New => $"whether {history.Of} is new for {key} within {history.Span}",
            _ => $"the share of bad labels known by then among earlier events of the same {key}",
        };
        string decay = history.HalfLifeMicroseconds > 0 ? $", each event counting half as much after {history.Span}" : "";
        string scale = history.Scale switch
        {
            NumberScale.Log1p => "; as log1p",
            NumberScale.Standard => "; standardised",
            NumberScale.StandardLog1p => "; as log1p, standardised",
            NumberScale.Rank => "; as rank",
            NumberScale.LogOdds => "; as log-odds against the share of all",
            _ => "",
        };
        return what + decay + scale;
    }

    private static string Describe(TextFeature text)
    {
        string[] runs =
        [
            .. text.WordLengths.Select(length => FormattableString.Invariant($"{length} {(length == 1 ? "word" : "words")}")),
            .. text.CharacterLengths.Select(length => FormattableString.Invariant($"{length} {(length == 1 ? "character" : "characters")}")),
        ];
        return FormattableString.Invariant($"a coefficient for every run of {string.Join(", ", runs)}; at most {text.Most} different runs of each length");
    }

    private static string Forgetting(FeatureOptions feature) => feature.ForgetHalfLifeMicroseconds > 0
        ? $"; what is learned of it fades to half in {DurationText.Format(feature.ForgetHalfLifeMicroseconds)}"
        : "";

    private static IEnumerable<string> Health(HealthOptions health)
    {
        yield return FormattableString.Invariant($"over {string.Join(", ", health.Windows.Select(window => window.Name))} and the last {health.LastLabels} labels");
        if (!health.Slices.IsEmpty) yield return $"told apart by {string.Join(", ", health.Slices)}";
        foreach (var alarm in health.Alarms)
        {
            string wait = alarm.ForMicroseconds > 0 ? $" for {DurationText.Format(alarm.ForMicroseconds)}" : "";
            yield return FormattableString.Invariant(
                $"alarm: {alarm.Name}; raised {(alarm.IsAbove ? "above" : "below")} {alarm.Bound} over {alarm.Window.Name}{wait}, from {alarm.Minimum} on");
        }
    }

    private static IEnumerable<string> Files(StreamDefinition definition)
    {
        if (definition.Source is FileSourceOptions source)
            yield return $"records from {source.Path} ({Words(source.Format)}{(source.Follow ? ", followed as it grows" : "")})";
        else if (definition.Source is KafkaSourceOptions topics) yield return Words(topics);
        else yield return "records: the definition names no source";
        yield return definition.Scores is { } scores ? $"scores to {scores.InWords}" : "scores: the definition names no place for them";
        yield return definition.Rejects is { } rejects ? $"rejects to {rejects.InWords}" : "rejects are only counted";
        if (definition.Kafka is { } kafka) yield return $"topics of the Kafka cluster at {kafka.Servers}";
        if (definition.Recording is { } recording) yield return $"recording in {recording.Folder}, files of {FigureText.Bytes(recording.MaximumBytes)}";
        if (definition.Webhook is { } webhook) yield return $"changes of alarms to {webhook.Url.GetLeftPart(UriPartial.Path)}, signed";
        if (definition.State is { } state)
        {
            yield return FormattableString.Invariant(
                $"state in {state.Folder}, committed every {DurationText.Format((long)state.EveryTime.TotalMicroseconds)} or {state.EveryEvents} records");
        }
        else yield return "state: the definition names no folder";
    }

    private static string Words(KafkaSourceOptions topics) =>
        $"records from the {(topics.AllTopics.Count() == 1 ? "topic" : "topics")} {string.Join(", ", topics.AllTopics)} as {topics.Instance} of the group {topics.Group}";

    private static string Describe(ListenOptions page)
    {
        string scheme = page.Certificate is null ? "http" : "https";
        string names = page.Hosts.IsEmpty ? "" : $", also as {string.Join(", ", page.Hosts)}";
        string key = page.KeyFile is { } file ? $"the key in {file}" : page.KeyVariable is { } variable ? $"the key in the environment variable {variable}" : "no key, as only this machine can reach it";
        return $"health at {scheme}://{new System.Net.IPEndPoint(page.Address, page.Port)}{names}; asks for {key}";
    }

    private static string Words(RecordingFormat format) => format switch
    {
        RecordingFormat.Csv => "CSV",
        RecordingFormat.Parquet => "Parquet",
        RecordingFormat.ByName => "several files",
        _ => "JSON Lines",
    };

    private static string Memory(EngineDefinition engine)
    {
        return FormattableString.Invariant(
            $"{FigureText.Bytes(CoefficientTables.Bytes(engine))} for the coefficients ({engine.Learning.Slots} slots, {engine.Learning.Bank.Length} settings), {Histories(engine)}and room for every event that awaits its label");
    }

    private static string Histories(EngineDefinition engine) =>
        engine.Features.Any(feature => feature is HistoryFeature) ? $"up to {FigureText.Bytes(engine.Histories.MemoryBytes)} for histories, " : "";
}
