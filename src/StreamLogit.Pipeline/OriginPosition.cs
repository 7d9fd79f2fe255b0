namespace StreamLogit.Pipeline;

/// <summary>How far one origin of a source has been read.</summary>
/// <param name="Origin">Its name: a file, a queue, a partition of a topic.</param>
/// <param name="Offset">Where the next record begins: a byte of a file (after decompression), an entry of a queue.</param>
/// <param name="Number">The number of the last record read, as rejects name it: the line of a file from 1; 0 before the first.</param>
/// <param name="Fingerprint">XXH3 (64 bits) of the last bytes before the offset, by which a replaced file is told; 0 where there is no such check.</param>
public sealed record OriginPosition(string Origin, long Offset, long Number, ulong Fingerprint);
