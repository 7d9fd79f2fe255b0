using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>rejects</c>: where records that cannot be used are written.</summary>
internal static class RejectsSection
{
    public static FileOutputOptions? Read(ValueReader? value, FilePaths files)
    {
        if (value?.Object() is not { } section) return null;
        string? path = files.ReadOutput(section.Required("file", "it names the file that rejects are written to"));
        section.End();
        return path is null ? null : new FileOutputOptions(path);
    }
}
