using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests;

/// <summary>An archive in memory over what was saved before it; what is written to it waits for the next save.</summary>
internal sealed class DictionaryArchive(DictionaryArchive? saved = null) : IBlockArchive
{
    private StateBlocks _blocks = new();

    public StateBlocks Blocks => _blocks;

    public void Write(string part, long number, ReadOnlySpan<byte> bytes) => _blocks.Put(part, number, bytes);

    public int Read(string part, long number, ref byte[] target)
    {
        byte[] bytes = _blocks.Find(part, number) ?? saved?._blocks.Find(part, number)
            ?? throw new InvalidStateException($"no block {number} of {part}");
        if (target.Length < bytes.Length) target = new byte[bytes.Length];
        bytes.CopyTo(target, 0);
        return bytes.Length;
    }

    public bool TryRead(string part, long number, ref byte[] target, out int length)
    {
        bool isThere = _blocks.Find(part, number) is not null || saved?._blocks.Find(part, number) is not null;
        length = isThere ? Read(part, number, ref target) : 0;
        return isThere;
    }

    public void Remove(string part, long number) => _blocks.Remove(part, number);

    public IEnumerable<long> Numbers(string part) =>
        _blocks.Read(part).Concat(saved?._blocks.Read(part) ?? []).Select(b => b.Number).Distinct().Order();

    /// <summary>Hands all that waits for a save over to what is saved.</summary>
    public void MoveTo(DictionaryArchive target)
    {
        foreach (var (part, number, bytes) in _blocks.Changes())
        {
            if (bytes is null) target._blocks.Remove(part, number);
            else target._blocks.Put(part, number, bytes);
        }
        _blocks = new StateBlocks();
    }
}
