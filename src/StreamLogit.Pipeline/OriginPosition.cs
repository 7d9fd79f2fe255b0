namespace StreamLogit.Pipeline;

/// <summary>How far one origin of a source has been read.</summary>
/// <param name="Origin">Its name: a file, or a partition of a topic as <c>tickets-3@</c>.</param>
/// <param name="Offset">Where the next record begins: a byte of a file (after decompression), an offset of a partition.</param>
/// <param name="Number">The number of the last record read, as rejects name it: the line of a file from 1, the offset in a partition; 0 before the first.</param>
/// <param name="Fingerprint">XXH3 (64 bits) of the last bytes before the offset, by which a replaced file is told; 0 where there is no such check.</param>
public sealed record OriginPosition(string Origin, long Offset, long Number, ulong Fingerprint);
