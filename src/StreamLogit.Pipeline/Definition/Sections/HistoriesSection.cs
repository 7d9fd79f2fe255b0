using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>histories</c>: the room for what is remembered of keys.</summary>
internal static class HistoriesSection
{
    private const int MostMebibytes = 1 << 20;

    public static HistoryOptions Read(ValueReader? value)
    {
        var defaults = new HistoryOptions();
        if (value?.Object() is not { } section) return defaults;
        var options = new HistoryOptions
        {
            MemoryBytes = section.Optional("memoryMiB")?.Whole(1, MostMebibytes) is { } mebibytes ? (long)mebibytes << 20 : defaults.MemoryBytes,
        };
        section.End();
        return options;
    }
}
