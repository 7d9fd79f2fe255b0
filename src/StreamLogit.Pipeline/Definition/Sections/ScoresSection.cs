using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>scores</c>: which scores are published, with what, and where they are written.</summary>
internal static class ScoresSection
{
    private const int MostReasons = 20;

    /// <summary>The output and what it adds to the decision.</summary>
    public static (FileOutputOptions? Output, DecisionOptions Decision) Read(ValueReader? value, DecisionOptions decision, FilePaths files, DefinitionUse use)
    {
        if (value?.Object() is not { } section) return (null, decision);
        var file = use == DefinitionUse.Run ? section.Required("file", "it names the file that scores are written to") : section.Optional("file");
        bool labelled = section.Optional("labelled")?.Flag() ?? decision.PublishLabelled;
        int reasons = section.Optional("reasons")?.Whole(0, MostReasons) ?? decision.Reasons;
        section.End();
        string? path = files.ReadOutput(file);
        return (path is null ? null : new FileOutputOptions(path), decision with { PublishLabelled = labelled, Reasons = reasons });
    }
}
