using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests;

/// <summary>An archive in memory, whose blocks are those of the next save too.</summary>
internal sealed class DictionaryArchive : IBlockArchive
{
    public StateBlocks Blocks { get; } = new();

    public void Write(string part, long number, ReadOnlySpan<byte> bytes) => Blocks.Put(part, number, bytes);

    public int Read(string part, long number, ref byte[] target)
    {
        byte[] bytes = Blocks.Find(part, number) ?? throw new InvalidStateException($"no block {number} of {part}");
        if (target.Length < bytes.Length) target = new byte[bytes.Length];
        bytes.CopyTo(target, 0);
        return bytes.Length;
    }

    public void Remove(string part, long number) => Blocks.Remove(part, number);

    public IEnumerable<long> Numbers(string part) => Blocks.Read(part).Select(b => b.Number);
}
