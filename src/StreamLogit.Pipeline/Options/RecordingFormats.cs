namespace StreamLogit.Pipeline.Options;

/// <summary>Tells the format of a recording.</summary>
public static class RecordingFormats
{
    /// <summary>The format that the ending of a name stands for, or null where it stands for none.</summary>
    public static RecordingFormat? OfName(string path) => Path.GetExtension(path).ToUpperInvariant() switch
    {
        ".JSONL" or ".NDJSON" => RecordingFormat.JsonLines,
        ".CSV" => RecordingFormat.Csv,
        _ => null,
    };
}
