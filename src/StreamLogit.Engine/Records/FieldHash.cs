using System.IO.Hashing;

namespace StreamLogit.Engine.Records;

/// <summary>The 64-bit hash of ids and category values: XXH3 (64 bits, seed 0) of their UTF-8 bytes, the same on every machine.</summary>
/// <remarks>Specification: xxHash fast digest algorithm, XXH3, https://github.com/Cyan4973/xxHash/blob/dev/doc/xxhash_spec.md.</remarks>
public static class FieldHash
{
    /// <summary>The hash of a text.</summary>
    public static ulong Of(ReadOnlySpan<byte> utf8) => XxHash3.HashToUInt64(utf8);
}
