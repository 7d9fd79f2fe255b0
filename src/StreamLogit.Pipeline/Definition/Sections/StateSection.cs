using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>state</c>: where the state is kept and how often it is committed.</summary>
internal static class StateSection
{
    private const long ShortestMicroseconds = 10_000;
    private const long LongestMicroseconds = 24L * 3600 * 1_000_000;
    private const int MostEvents = 1_000_000_000;

    public static StateOptions? Read(ValueReader? value, FilePaths files)
    {
        if (value?.Object() is not { } section) return null;
        string? folder = files.Read(section.Required("folder", "it names the folder that the state is kept in"));
        long? every = section.Optional("every")?.Duration(ShortestMicroseconds, LongestMicroseconds);
        int? everyEvents = section.Optional("everyEvents")?.Whole(1, MostEvents);
        section.End();
        if (folder is null) return null;
        var defaults = new StateOptions(folder);
        return defaults with
        {
            EveryTime = every is { } microseconds ? TimeSpan.FromMicroseconds(microseconds) : defaults.EveryTime,
            EveryEvents = everyEvents ?? defaults.EveryEvents,
        };
    }
}
