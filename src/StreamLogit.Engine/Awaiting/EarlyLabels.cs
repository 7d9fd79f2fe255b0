using System.Text;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Awaiting;

/// <summary>Labels that came before their events, in the order in which they came, each until its event comes or its time is over.</summary>
/// <remarks>They are few: streams bring labels after events, and what is out of order is so by seconds.</remarks>
internal sealed class EarlyLabels(long waitMicroseconds)
{
    private const string Part = "awaiting/early";
    private readonly LinkedList<EarlyLabel> _labels = [];
    private readonly Dictionary<ulong, List<LinkedListNode<EarlyLabel>>> _byHash = [];
    private bool _hasChanged = true;

    public int Count => _labels.Count;

    public void Add(ulong idHash, EarlyLabel label)
    {
        if (!_byHash.TryGetValue(idHash, out var nodes)) _byHash[idHash] = nodes = [];
        nodes.Add(_labels.AddLast(label));
        _hasChanged = true;
    }

    /// <summary>Takes the first label that waits for an event.</summary>
    public EarlyLabel? Take(ReadOnlySpan<byte> id, ulong idHash)
    {
        if (_labels.Count == 0 || !_byHash.TryGetValue(idHash, out var nodes)) return null;
        string text = Encoding.UTF8.GetString(id);
        foreach (var node in nodes)
        {
            if (node.Value.Id != text) continue;
            Remove(idHash, nodes, node);
            return node.Value;
        }
        return null;
    }

    /// <summary>Takes a label whose time is over at a time of the stream's clock.</summary>
    public EarlyLabel? TakeExpired(long clockMicroseconds)
    {
        var node = _labels.First;
        if (node is null || clockMicroseconds - node.Value.CameAtMicroseconds <= waitMicroseconds) return null;
        ulong idHash = Records.FieldHash.Of(Encoding.UTF8.GetBytes(node.Value.Id));
        Remove(idHash, _byHash[idHash], node);
        return node.Value;
    }

    public void Save(StateBlocks changes)
    {
        if (!_hasChanged) return;
        _hasChanged = false;
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(_labels.Count);
        foreach (var label in _labels)
        {
            writer.Write(label.Id);
            writer.Write(label.Label);
            writer.Write(label.Weight);
            writer.Write(label.CameAtMicroseconds);
            writer.Write(label.Origin);
            writer.Write(label.Position);
            writer.Write(label.Record.Length);
            writer.Write(label.Record);
        }
        changes.Put(Part, 0, bytes.ToArray());
    }

    public void Load(StateBlocks state)
    {
        byte[] bytes = state.Find(Part, 0) ?? throw new InvalidStateException($"the state has no {Part}");
        using var reader = new BinaryReader(new MemoryStream(bytes));
        for (int count = reader.ReadInt32(); count > 0; count--)
        {
            string id = reader.ReadString();
            Add(Records.FieldHash.Of(Encoding.UTF8.GetBytes(id)), new EarlyLabel(
                id, reader.ReadInt32(), reader.ReadDouble(), reader.ReadInt64(), reader.ReadString(), reader.ReadInt64(), reader.ReadBytes(reader.ReadInt32())));
        }
        _hasChanged = false;
    }

    private void Remove(ulong idHash, List<LinkedListNode<EarlyLabel>> nodes, LinkedListNode<EarlyLabel> node)
    {
        _labels.Remove(node);
        nodes.Remove(node);
        if (nodes.Count == 0) _byHash.Remove(idHash);
        _hasChanged = true;
    }
}
