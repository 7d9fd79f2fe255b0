using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>labels</c>: how events wait for their labels.</summary>
internal static class LabelsSection
{
    private const long ShortestWaitMicroseconds = 1_000_000;
    private const int LargestMemoryMebibytes = 1 << 20;
    private const int MostThinned = 1_000_000;
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
            EarlyMicroseconds = section.Optional("early")?.Duration(0, LongestWaitMicroseconds) ?? defaults.EarlyMicroseconds,
            Keep = ReadKeep(section.Optional("keep")),
            MemoryBytes = section.Optional("memoryMiB")?.Whole(1, LargestMemoryMebibytes) * (1L << 20) ?? defaults.MemoryBytes,
        };
        section.End();
        return options;
    }

    private static ThinningOptions? ReadKeep(ValueReader? value)
    {
        if (value?.Object() is not { } section) return null;
        double? above = section.Required("above", "the probability from which on every event is kept")?.Number(NumberRange.ZeroToOne);
        int? oneIn = section.Required("oneIn", "of how many events below it one is kept")?.Whole(1, MostThinned);
        section.End();
        return above is null || oneIn is null ? null : new ThinningOptions(above.Value, oneIn.Value);
    }
}
