namespace StreamLogit.Pipeline;

/// <summary>How much of a source has been read.</summary>
/// <param name="Bytes">Bytes read, as they lie on the disk or came over the wire.</param>
/// <param name="TotalBytes">Bytes there are, or null where nobody knows.</param>
public readonly record struct SourceProgress(long Bytes, long? TotalBytes);
