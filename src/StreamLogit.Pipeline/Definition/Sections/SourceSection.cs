using StreamLogit.Pipeline.Definition.Sections.Kafka;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>source</c>: where the records come from.</summary>
internal static class SourceSection
{
    public static SourceOptions? Read(ValueReader? value, FilePaths files, string stream)
    {
        if (value?.Object() is not { } section) return null;
        var file = section.Optional("file");
        var format = section.Optional("format");
        var follow = section.Optional("follow");
        var kafka = section.Optional("kafka");
        section.End();
        if ((file is null) == (kafka is null))
        {
            section.Error(file is null
                ? "one of the keys \"file\" and \"kafka\" is missing: it says where the records come from"
                : "has both \"file\" and \"kafka\": records come from one place");
        }
        if (kafka is null) return ReadFile(file, format, follow, files);
        format?.Error("is about files: leave it away");
        follow?.Error("is about files, and topics are always followed: leave it away");
        return KafkaSourceSection.Read(kafka, stream);
    }

    private static FileSourceOptions? ReadFile(ValueReader? file, ValueReader? formatKey, ValueReader? follow, FilePaths files)
    {
        bool isFollowed = follow?.Flag() ?? false;
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
