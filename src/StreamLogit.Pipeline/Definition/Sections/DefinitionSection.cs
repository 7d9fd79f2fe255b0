using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Definition.Sections.Kafka;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>The definition as a whole.</summary>
internal static class DefinitionSection
{
    /// <summary>The definition, without its text; meaningless where errors were added.</summary>
    public static StreamDefinition? Read(ValueReader value, string folder, DefinitionUse use)
    {
        if (value.Object() is not { } definition) return null;
        definition.Optional("$schema")?.Text();
        string? stream = definition.Required("stream", "it names the stream")?.Text();
        var record = definition.Optional("record");
        var features = definition.Required("features", "it lists what the model sees of an event");
        var histories = definition.Optional("histories");
        var learning = definition.Optional("learning");
        var labels = LabelsSection.Read(definition.Optional("labels"));
        var decision = DecisionSection.Read(definition.Optional("decision"));
        var health = definition.Optional("health");
        var kafkaKey = definition.Optional("kafka");
        var source = ForRun("source", "it says where the records come from");
        var scores = ForRun("scores", "it says where scores are written");
        var rejects = definition.Optional("rejects");
        var recording = definition.Optional("recording");
        var state = ForRun("state", "it says in which folder the state is kept");
        var listen = definition.Optional("listen");
        var webhook = definition.Optional("webhook");
        definition.End();

        var files = new FilePaths(folder);
        var recordOptions = RecordSection.Read(record, labels);
        var featureOptions = FeaturesSection.Read(features, recordOptions, labels);
        var (learningOptions, warmStartPath) = LearningSection.Read(learning, featureOptions, files, use);
        var kafka = KafkaSection.Read(kafkaKey, folder);
        var sourceOptions = SourceSection.Read(source, files, stream ?? "");
        var engine = new EngineDefinition
        {
            Stream = stream ?? "",
            Record = recordOptions,
            Features = featureOptions ?? [],
            Histories = HistoriesSection.Read(histories),
            Learning = learningOptions,
            Labels = labels,
            Decision = decision,
            Health = HealthSection.Read(health, recordOptions, featureOptions ?? []),
        };
        var (output, decisionOptions) = ScoresSection.Read(scores, engine, sourceOptions, files, use);
        var rejectOutput = RejectsSection.Read(rejects, files);
        if (kafkaKey is null && (sourceOptions is KafkaSourceOptions || output is TopicOutputOptions || rejectOutput is TopicOutputOptions))
            definition.Error("the key \"kafka\" is missing: it names the cluster of the topics");
        return new StreamDefinition
        {
            Engine = engine with { Decision = decisionOptions },
            WarmStartPath = warmStartPath,
            Kafka = kafka,
            Source = sourceOptions,
            Scores = output,
            Rejects = rejectOutput,
            Recording = RecordingSection.Read(recording, files),
            State = StateSection.Read(state, files),
            Listen = ListenSection.Read(listen, files),
            Webhook = WebhookSection.Read(webhook, files),
            EffectiveJson = "",
        };

        ValueReader? ForRun(string key, string purpose) =>
            use == DefinitionUse.Run ? definition.Required(key, purpose) : definition.Optional(key);
    }
}
