using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>recording</c>: where every record is recorded as the engine takes it.</summary>
internal static class RecordingSection
{
    private const int MostMebibytes = 1 << 16;

    public static RecordingOptions? Read(ValueReader? value, FilePaths files)
    {
        if (value?.Object() is not { } section) return null;
        string? folder = files.ReadOutput(section.Required("folder", "it names the folder that recordings are written to"));
        int? mebibytes = section.Optional("maxMiB")?.Whole(1, MostMebibytes);
        section.End();
        if (folder is null) return null;
        var defaults = new RecordingOptions(folder);
        return defaults with { MaximumBytes = mebibytes * (1L << 20) ?? defaults.MaximumBytes };
    }
}
