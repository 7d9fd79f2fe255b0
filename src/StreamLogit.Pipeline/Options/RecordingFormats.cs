namespace StreamLogit.Pipeline.Options;

/// <summary>Tells how a recording is written, by its name.</summary>
public static class RecordingFormats
{
    /// <summary>The names that tell a format, for messages.</summary>
    public const string KnownNames = ".jsonl, .ndjson or .csv, with .gz or .zst behind it where it is compressed, or .parquet";

    /// <summary>The format that the ending of a name stands for, or null where it stands for none.</summary>
    public static RecordingFormat? OfName(string path)
    {
        string name = PackingOfName(path) == RecordingPacking.None ? path : Path.GetFileNameWithoutExtension(path);
        return Path.GetExtension(name).ToUpperInvariant() switch
        {
            ".JSONL" or ".NDJSON" => RecordingFormat.JsonLines,
            ".CSV" => RecordingFormat.Csv,
            ".PARQUET" when name == path => RecordingFormat.Parquet,
            _ => null,
        };
    }

    /// <summary>The packing that the ending of a name stands for.</summary>
    public static RecordingPacking PackingOfName(string path) => Path.GetExtension(path).ToUpperInvariant() switch
    {
        ".GZ" => RecordingPacking.Gzip,
        ".ZST" => RecordingPacking.Zstandard,
        _ => RecordingPacking.None,
    };
}
