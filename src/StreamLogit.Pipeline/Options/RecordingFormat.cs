namespace StreamLogit.Pipeline.Options;

/// <summary>How the records of a file are written.</summary>
public enum RecordingFormat
{
    /// <summary>One JSON object a line, UTF-8.</summary>
    JsonLines,

    /// <summary>Comma-separated values (RFC 4180) whose first line names the columns.</summary>
    Csv,

    /// <summary>Apache Parquet: every row a record, every column a field.</summary>
    Parquet,

    /// <summary>The name of each file says it. For several files.</summary>
    ByName,
}
