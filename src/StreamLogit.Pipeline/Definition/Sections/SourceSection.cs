using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>source</c>: where the records come from.</summary>
internal static class SourceSection
{
    public static SourceOptions? Read(ValueReader? value, FilePaths files)
    {
        if (value?.Object() is not { } section) return null;
        var file = section.Required("file", "it names the recording to read, or \"-\" for standard input");
        var formatKey = section.Optional("format");
        bool follow = section.Optional("follow")?.Flag() ?? false;
        section.End();
        bool standardInput = file?.Value.Text == "-";
        string? path = standardInput ? "-" : files.Read(file);
        var format = formatKey is null
            ? FormatOf(file, path)
            : formatKey.OneOf(("jsonl", RecordingFormat.JsonLines), ("csv", RecordingFormat.Csv));
        return path is null || format is null ? null : new FileSourceOptions(path, format.Value, follow);
    }

    private static RecordingFormat? FormatOf(ValueReader? file, string? path)
    {
        if (file is null || path is null) return null;
        if (RecordingFormats.OfName(path) is { } format) return format;
        file.Error($"the name {Quoted.Text(file.Value.Text)} does not tell the format (.jsonl, .ndjson or .csv would): add \"format\": \"jsonl\" or \"csv\"");
        return null;
    }
}
