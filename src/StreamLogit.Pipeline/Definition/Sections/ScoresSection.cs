using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Definition.Sections.Kafka;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>scores</c>: which scores are published, with what, and where they are written.</summary>
internal static class ScoresSection
{
    private const int MostReasons = 20;

    /// <summary>The output, and the decision with what the section adds to it.</summary>
    public static (OutputOptions? Output, DecisionOptions Decision) Read(ValueReader? value, EngineDefinition engine, SourceOptions? source, FilePaths files, DefinitionUse use)
    {
        var decision = engine.Decision;
        if (value?.Object() is not { } section) return (null, decision);
        var file = section.Optional("file");
        var kafka = section.Optional("kafka");
        bool labelled = section.Optional("labelled")?.Flag() ?? decision.PublishLabelled;
        int reasons = section.Optional("reasons")?.Whole(0, MostReasons) ?? decision.Reasons;
        section.End();
        if (file is null && kafka is null && use == DefinitionUse.Run) section.Error("one of the keys \"file\" and \"kafka\" is missing: it says where scores are written");
        if (file is not null && kafka is not null) section.Error("has both \"file\" and \"kafka\": scores are written to one place");
        var topic = kafka is null ? null : TopicOutputSection.ReadScores(kafka, engine, source);
        string? path = files.ReadOutput(file);
        return (path is null ? topic : new FileOutputOptions(path), decision with { PublishLabelled = labelled, Reasons = reasons });
    }
}
