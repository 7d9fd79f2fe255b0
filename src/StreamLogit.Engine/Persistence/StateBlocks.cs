namespace StreamLogit.Engine.Persistence;

/// <summary>
/// The state of an engine, or what changed in it since the last time, as numbered blocks of bytes in named parts.
/// A later block replaces the one of the same part and number.
/// </summary>
public sealed class StateBlocks
{
    private readonly Dictionary<string, SortedDictionary<long, byte[]?>> _parts = new(StringComparer.Ordinal);

    /// <summary>Puts a block, replacing the one that has the same part and number.</summary>
    public void Put(string part, long number, ReadOnlySpan<byte> bytes) => Numbers(part)[number] = bytes.ToArray();

    /// <summary>Says that a block is gone.</summary>
    public void Remove(string part, long number) => Numbers(part)[number] = null;

    /// <summary>All blocks of a part in the order of their numbers; those that were removed are left out.</summary>
    public IEnumerable<(long Number, byte[] Bytes)> Read(string part)
    {
        if (!_parts.TryGetValue(part, out var numbers)) yield break;
        foreach (var (number, bytes) in numbers)
            if (bytes is not null) yield return (number, bytes);
    }

    /// <summary>The block of that part and number, or null where there is none.</summary>
    public byte[]? Find(string part, long number) =>
        _parts.TryGetValue(part, out var numbers) && numbers.TryGetValue(number, out var bytes) ? bytes : null;

    /// <summary>Every change in the order of parts and numbers; null bytes mean that the block is gone.</summary>
    public IEnumerable<(string Part, long Number, byte[]? Bytes)> Changes()
    {
        foreach (var (part, numbers) in _parts.OrderBy(p => p.Key, StringComparer.Ordinal))
            foreach (var (number, bytes) in numbers)
                yield return (part, number, bytes);
    }

    private SortedDictionary<long, byte[]?> Numbers(string part)
    {
        if (!_parts.TryGetValue(part, out var numbers)) _parts[part] = numbers = [];
        return numbers;
    }
}
