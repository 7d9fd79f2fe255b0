using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Pipeline.Definition.Sections.Kafka;

/// <summary><c>scores.kafka</c> and <c>rejects.kafka</c>: the topic that results are written to.</summary>
internal static class TopicOutputSection
{
    /// <summary>The output of scores.</summary>
    public static TopicOutputOptions? ReadScores(ValueReader value, EngineDefinition engine)
    {
        if (value.Object() is not { } section) return null;
        var topic = section.Required("topic", "it names the topic that scores are written to");
        var key = section.Optional("key");
        var properties = KafkaProperties.Read(section.Optional("properties"));
        section.End();
        string? name = topic is null ? null : TopicName.Read(topic);
        string? field = key?.FieldPath();
        if (field == engine.Record.Id) field = null;
        if (field is not null && !new RecordSchema(engine).Fields.Any(known => known.Path == field && known.Use.HasFlag(FieldUse.Category)))
            key!.Error($"no feature reads the field {Quoted.Text(field)} as a category: name one that is read, or the id");
        return name is null ? null : new TopicOutputOptions(name) { KeyField = field, Properties = properties };
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
