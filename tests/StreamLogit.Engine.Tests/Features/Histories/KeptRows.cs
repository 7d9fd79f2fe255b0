using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Features.Histories;

/// <summary>Evicted rows in a dictionary. What was put since the last save is lost with the engine, as after a crash.</summary>
internal sealed class KeptRows : IEvictedRows
{
    private readonly Dictionary<ulong, byte[]> _saved;
    private readonly Dictionary<ulong, byte[]> _unsaved = [];

    public KeptRows()
        : this([])
    {
    }

    private KeptRows(Dictionary<ulong, byte[]> saved) => _saved = saved;

    public int Count => _saved.Keys.Union(_unsaved.Keys).Count();

    public void Put(ulong key, ReadOnlySpan<byte> row) => _unsaved[key] = row.ToArray();

    public int Read(ulong key, Span<byte> row)
    {
        if (!_unsaved.TryGetValue(key, out byte[]? bytes) && !_saved.TryGetValue(key, out bytes)) return -1;
        bytes.CopyTo(row);
        return bytes.Length;
    }

    public void Save(StateBlocks changes)
    {
        foreach (var (key, row) in _unsaved) _saved[key] = row;
        _unsaved.Clear();
    }

    /// <summary>What is there for an engine that goes on from the last save.</summary>
    public KeptRows AfterCrash() => new(_saved);
}
