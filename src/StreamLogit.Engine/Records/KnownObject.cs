using System.Text;

namespace StreamLogit.Engine.Records;

/// <summary>An object whose keys are read: the record itself, or one that a dotted path leads into. Finds its keys by name.</summary>
/// <remarks>
/// Keys that nobody reads are learned as they come, up to a bound, so that they too are compared directly the next time.
/// </remarks>
internal sealed class KnownObject
{
    private const int MostLearned = 256;

    private KnownKey?[] _table = new KnownKey?[64];
    private int _count;
    private int _learned;

    /// <summary>Stands before the first key.</summary>
    public KnownKey Start { get; } = KnownKey.CreateUnmatched();

    /// <summary>Stands for the keys that are not known. Its values are not read.</summary>
    public KnownKey Stray { get; } = KnownKey.CreateUnmatched();

    /// <summary>All parts that stand within, by rank, each with the key of the record that stands for the same.</summary>
    public List<(RecordPart Part, KnownKey Flat)> Parts { get; } = [];

    /// <summary>Builds the tree of keys that the definition's paths lead through.</summary>
    /// <remarks>
    /// A path <c>a.b</c> leads to the key b of the object at key a. In the record itself a key named <c>a.b</c> stands for the same,
    /// as flat records have it; a record with both has that key twice.
    /// </remarks>
    /// <param name="parts">The parts, by rank.</param>
    public static KnownObject Build(IEnumerable<RecordPart> parts)
    {
        var root = new KnownObject();
        foreach (var part in parts)
        {
            var here = root;
            var flat = root.GetOrAdd(part.Path);
            flat.Add(part);
            string[] names = part.Path.Split('.');
            if (names.Length == 1) continue;
            foreach (string name in names[..^1])
            {
                here = here.GetOrAdd(name).Inner ??= new KnownObject();
                here.Parts.Add((part, flat));
            }
            var nested = here.GetOrAdd(names[^1]);
            nested.Add(part);
            nested.Twin = flat;
            flat.Twin = nested;
        }
        root.Settle();
        return root;
    }

    /// <summary>The key of a name, or null.</summary>
    public KnownKey? Find(ReadOnlySpan<byte> name, ulong fingerprint)
    {
        int mask = _table.Length - 1;
        for (int i = (int)fingerprint & mask; _table[i] is { } key; i = (i + 1) & mask)
        {
            if (name.SequenceEqual(key.Name)) return key;
        }
        return null;
    }

    /// <summary>Remembers a key that nobody reads, or returns null where there is no room for it.</summary>
    public KnownKey? TryLearn(ReadOnlySpan<byte> name)
    {
        if (_learned == MostLearned || name.Length + 3 > KnownKey.LongestText) return null;
        _learned++;
        return Add(new KnownKey(name));
    }

    private void Settle()
    {
        foreach (var key in _table)
        {
            key?.Settle();
            key?.Inner?.Settle();
        }
    }

    private KnownKey GetOrAdd(string name)
    {
        byte[] utf8 = Encoding.UTF8.GetBytes(name);
        return Find(utf8, KeyFingerprint.Of(utf8)) ?? Add(new KnownKey(utf8));
    }

    private KnownKey Add(KnownKey key)
    {
        if (++_count * 2 > _table.Length)
        {
            var old = _table;
            _table = new KnownKey?[old.Length * 2];
            foreach (var moved in old)
            {
                if (moved is not null) Place(moved);
            }
        }
        Place(key);
        return key;
    }

    private void Place(KnownKey key)
    {
        int mask = _table.Length - 1;
        int i = (int)KeyFingerprint.Of(key.Name) & mask;
        while (_table[i] is not null) i = (i + 1) & mask;
        _table[i] = key;
    }
}
