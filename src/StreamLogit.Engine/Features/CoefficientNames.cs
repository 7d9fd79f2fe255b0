using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Features;

/// <summary>The names of hashed slots, each the first value that used the slot, up to <see cref="MaximumNames"/>.</summary>
internal sealed class CoefficientNames
{
    /// <summary>Names kept; values that come later work as well but are listed by slot number.</summary>
    public const int MaximumNames = 100_000;

    /// <summary>Bytes of a value that go into a name.</summary>
    public const int MaximumTextBytes = 64;

    private const string Part = "features/names";
    private readonly Dictionary<int, string> _names = [];
    private readonly List<(int Slot, string Name)> _unsaved = [];
    private long _savedBlocks;

    public bool HasRoom => _names.Count < MaximumNames;

    public void Add(int slot, string name)
    {
        _names[slot] = name;
        _unsaved.Add((slot, name));
    }

    public string Of(int slot) =>
        _names.TryGetValue(slot, out string? name) ? name : FormattableString.Invariant($"slot {slot}");

    public void Save(StateBlocks changes)
    {
        if (_unsaved.Count == 0) return;
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        foreach (var (slot, name) in _unsaved)
        {
            writer.Write(slot);
            writer.Write(name);
        }
        changes.Put(Part, _savedBlocks++, bytes.ToArray());
        _unsaved.Clear();
    }

    public void Load(StateBlocks state)
    {
        foreach (var (number, bytes) in state.Read(Part))
        {
            using var reader = new BinaryReader(new MemoryStream(bytes));
            while (reader.BaseStream.Position < bytes.Length)
            {
                int slot = reader.ReadInt32();
                _names[slot] = reader.ReadString();
            }
            _savedBlocks = number + 1;
        }
    }
}
