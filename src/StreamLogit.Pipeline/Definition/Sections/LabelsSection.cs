using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>labels</c>: how events wait for their labels.</summary>
internal static class LabelsSection
{
    private const long ShortestWaitMicroseconds = 1_000_000;
    private const long LongestWaitMicroseconds = 3650L * 24 * 3600 * 1_000_000;

    public static LabelOptions Read(ValueReader? value)
    {
        var defaults = new LabelOptions();
        if (value?.Object() is not { } section) return defaults;
        var options = new LabelOptions
        {
            WaitMicroseconds = section.Optional("wait")?.Duration(ShortestWaitMicroseconds, LongestWaitMicroseconds) ?? defaults.WaitMicroseconds,
            Unlabelled = section.Optional("unlabelled")?.OneOf(("drop", UnlabelledEvents.Drop), ("negative", UnlabelledEvents.Negative))
                ?? defaults.Unlabelled,
        };
        section.End();
        return options;
    }
}
