using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
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
        foreach (var feature in engine.Features) yield return $"  {feature.Name}: {Describe(feature)}";
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
        yield return "Files";
        foreach (string line in Files(definition)) yield return $"  {line}";
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
        NumberFeature => "a number, less its running mean and over its running standard deviation; a coefficient of its own where it is missing",
        CategoryFeature { Fields.Length: 1 } => "a coefficient for every value, \"missing\" among them",
        CategoryFeature => "a coefficient for every combination of values",
        TimeCycleFeature => "the time of the event in its cycle, as sine and cosine",
        NumberCycleFeature => "a number in its cycle, as sine and cosine",
        _ => feature.ToString(),
    };

    private static IEnumerable<string> Files(StreamDefinition definition)
    {
        if (definition.Source is FileSourceOptions source)
            yield return $"records from {source.Path} ({Words(source.Format)}{(source.Follow ? ", followed as it grows" : "")})";
        else yield return "records: the definition names no source";
        yield return definition.Scores is { } scores ? $"scores to {scores.Path}" : "scores: the definition names no file";
        yield return definition.Rejects is { } rejects ? $"rejects to {rejects.Path}" : "rejects are only counted";
        if (definition.Recording is { } recording) yield return $"recording in {recording.Folder}, files of {FigureText.Bytes(recording.MaximumBytes)}";
        if (definition.State is { } state)
        {
            yield return FormattableString.Invariant(
                $"state in {state.Folder}, committed every {DurationText.Format((long)state.EveryTime.TotalMicroseconds)} or {state.EveryEvents} records");
        }
        else yield return "state: the definition names no folder";
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
            $"{FigureText.Bytes(CoefficientTables.Bytes(engine.Learning))} for the coefficients ({engine.Learning.Slots} slots, {engine.Learning.Bank.Length} settings), and room for every event that awaits its label");
    }
}
