using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Features.Histories;

/// <summary>An archive in memory. What was written since the last save is lost with the engine, as after a crash.</summary>
internal sealed class CrashingArchive : IBlockArchive
{
    private readonly Dictionary<(string, long), byte[]> _saved;
    private readonly Dictionary<(string, long), byte[]> _unsaved = [];

    public CrashingArchive()
        : this([])
    {
    }

    private CrashingArchive(Dictionary<(string, long), byte[]> saved) => _saved = saved;

    public void Write(string part, long number, ReadOnlySpan<byte> bytes) => _unsaved[(part, number)] = bytes.ToArray();

    public int Read(string part, long number, ref byte[] target) =>
        TryRead(part, number, ref target, out int length) ? length : throw new InvalidStateException($"no block {number} of {part}");

    public bool TryRead(string part, long number, ref byte[] target, out int length)
    {
        length = 0;
        if (!_unsaved.TryGetValue((part, number), out byte[]? bytes) && !_saved.TryGetValue((part, number), out bytes)) return false;
        length = bytes.Length;
        if (target.Length < length) target = new byte[length];
        bytes.CopyTo(target, 0);
        return true;
    }

    public void Remove(string part, long number) => throw new NotSupportedException();

    public IEnumerable<long> Numbers(string part) => throw new NotSupportedException();

    public void Save()
    {
        foreach (var (block, bytes) in _unsaved) _saved[block] = bytes;
        _unsaved.Clear();
    }

    /// <summary>What is there for an engine that goes on from the last save.</summary>
    public CrashingArchive AfterCrash() => new(_saved);
}
