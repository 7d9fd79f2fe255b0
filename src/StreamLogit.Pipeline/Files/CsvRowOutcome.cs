namespace StreamLogit.Pipeline.Files;

/// <summary>What a look for a row of comma-separated values found.</summary>
internal enum CsvRowOutcome
{
    /// <summary>A whole row.</summary>
    Complete,

    /// <summary>The beginning of a row; more must be read.</summary>
    Incomplete,

    /// <summary>No row as RFC 4180 has it.</summary>
    Malformed,
}
