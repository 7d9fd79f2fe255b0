using StreamLogit.Pipeline.Files;
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
        var follow = section.Optional("follow");
        bool isFollowed = follow?.Flag() ?? false;
        section.End();
        bool standardInput = file?.Value.Text == "-";
        string? path = standardInput ? "-" : files.Read(file);
        var format = formatKey is null
            ? FormatOf(file, path)
            : formatKey.OneOf(("jsonl", RecordingFormat.JsonLines), ("csv", RecordingFormat.Csv), ("parquet", RecordingFormat.Parquet));
        if (path is null || format is null) return null;
        if (isFollowed && (format == RecordingFormat.Parquet || RecordingFormats.PackingOfName(path) != RecordingPacking.None))
            follow!.Error("a compressed file or Parquet has an end that cannot be followed: leave this away");
        if (standardInput && format == RecordingFormat.Parquet) formatKey!.Error("Parquet is read from its end, which standard input does not have: name a file");
        return new FileSourceOptions(path, format.Value, isFollowed);
    }

    private static RecordingFormat? FormatOf(ValueReader? file, string? path)
    {
        if (file is null || path is null) return null;
        if (RecordingFormats.OfName(path) is { } format) return format;
        if (RecordingNames.IsSeveral(path)) return RecordingFormat.ByName;
        file.Error($"the name {Quoted.Text(file.Value.Text)} does not tell the format ({RecordingFormats.KnownNames} would): add \"format\": \"jsonl\", \"csv\" or \"parquet\"");
        return null;
    }
}
