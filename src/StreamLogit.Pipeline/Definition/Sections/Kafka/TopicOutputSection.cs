using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Pipeline.Definition.Sections.Kafka;

/// <summary><c>scores.kafka</c> and <c>rejects.kafka</c>: the topic that results are written to.</summary>
internal static class TopicOutputSection
{
    private const long ShortestMicroseconds = 1000;
    private const long LongestMicroseconds = 10_000_000;
    private const int MostEvents = 1_000_000;

    /// <summary>The output of scores.</summary>
    public static TopicOutputOptions? ReadScores(ValueReader value, EngineDefinition engine, SourceOptions? source)
    {
        if (value.Object() is not { } section) return null;
        var topic = section.Required("topic", "it names the topic that scores are written to");
        var key = section.Optional("key");
        var delivery = section.Optional("delivery");
        long? every = section.Optional("every")?.Duration(ShortestMicroseconds, LongestMicroseconds);
        int? everyEvents = section.Optional("everyEvents")?.Whole(1, MostEvents);
        var properties = KafkaProperties.Read(section.Optional("properties"));
        section.End();
        string? name = topic is null ? null : TopicName.Read(topic);
        string? field = key?.FieldPath();
        if (field == engine.Record.Id) field = null;
        if (field is not null && !new RecordSchema(engine).Fields.Any(known => known.Path == field && known.Use.HasFlag(FieldUse.Category)))
            key!.Error($"no feature reads the field {Quoted.Text(field)} as a category: name one that is read, or the id");
        bool isFromTopics = source is KafkaSourceOptions;
        bool isExactlyOnce = delivery?.OneOf(("exactly-once", true), ("at-least-once", false)) ?? isFromTopics;
        if (isExactlyOnce && source is FileSourceOptions) delivery!.Error("commits the offsets of topics with the scores, and the source is a file: say \"at-least-once\"");
        if (name is null) return null;
        var options = new TopicOutputOptions(name) { KeyField = field, IsExactlyOnce = isExactlyOnce, Properties = properties };
        return options with
        {
            EveryTime = every is { } microseconds ? TimeSpan.FromMicroseconds(microseconds) : options.EveryTime,
            EveryEvents = everyEvents ?? options.EveryEvents,
        };
    }

    /// <summary>The output of rejects.</summary>
    public static TopicOutputOptions? ReadRejects(ValueReader value)
    {
        if (value.Object() is not { } section) return null;
        var topic = section.Required("topic", "it names the topic that rejects are written to");
        section.End();
        string? name = topic is null ? null : TopicName.Read(topic);
        return name is null ? null : new TopicOutputOptions(name);
    }
}
