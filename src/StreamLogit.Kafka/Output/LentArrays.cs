namespace StreamLogit.Kafka.Output;

/// <summary>
/// Arrays to hand bytes to the client, which wants arrays of exactly their length and copies them before it returns. One array of each length is enough.
/// </summary>
internal sealed class LentArrays
{
    private const int Longest = 1 << 13;

    private readonly byte[]?[] _byLength = new byte[Longest + 1][];

    /// <summary>The bytes as an array, until the next call with as many.</summary>
    public byte[] Lend(ReadOnlySpan<byte> bytes)
    {
        if (bytes.Length > Longest) return bytes.ToArray();
        var array = _byLength[bytes.Length] ??= new byte[bytes.Length];
        bytes.CopyTo(array);
        return array;
    }
}
