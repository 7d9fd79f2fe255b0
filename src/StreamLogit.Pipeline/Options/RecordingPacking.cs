namespace StreamLogit.Pipeline.Options;

/// <summary>How the bytes of a recording are packed.</summary>
public enum RecordingPacking
{
    /// <summary>Not at all.</summary>
    None,

    /// <summary>gzip (RFC 1952), one member or several.</summary>
    Gzip,

    /// <summary>Zstandard (RFC 8878), one frame or several.</summary>
    Zstandard,
}
