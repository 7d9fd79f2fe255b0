namespace StreamLogit.Pipeline.Definition;

/// <summary>Reads the keys of an object. The keys that are asked for are the known ones; <see cref="End"/> refuses all others.</summary>
internal sealed class ObjectReader(PositionedValue value, string path, DefinitionErrors errors)
{
    private readonly List<string> _known = [];
    private bool _keysAreFree;

    public void Error(string message) => errors.Add(value.Place, path, message);

    /// <summary>The value of a key, or null where it is absent.</summary>
    public ValueReader? Optional(string key)
    {
        _known.Add(key);
        var member = value.Members.FirstOrDefault(member => member.Key == key);
        return member is null ? null : new ValueReader(member.Value, DefinitionPath.Member(path, key), errors);
    }

    /// <summary>The value of a key that must be there; where it is absent, an error says what it is for.</summary>
    public ValueReader? Required(string key, string purpose)
    {
        var found = Optional(key);
        if (found is null) errors.Add(value.Place, path, $"the key {Quoted.Text(key)} is missing: {purpose}");
        return found;
    }

    /// <summary>
    /// The one of several keys that says what kind of object this is. Where none or more than one is there, that is the only error:
    /// without a kind nobody can say which other keys are right.
    /// </summary>
    public (string Key, ValueReader Value)? Kind(string what, params IReadOnlyList<string> kinds)
    {
        var present = value.Members.Where(member => kinds.Contains(member.Key)).Select(member => member.Key).Distinct().ToList();
        if (present.Count == 1) return (present[0], Optional(present[0])!);
        if (present.Count > 1)
        {
            Error($"has both {Quoted.Text(present[0])} and {Quoted.Text(present[1])}, which are two kinds of {what}: write one {what} each");
            return null;
        }
        string found = value.Members.IsEmpty ? "no key at all" : Quoted.List(value.Members.Select(member => member.Key));
        string hint = value.Members.Select(member => NearestName.Hint(member.Key, kinds)).FirstOrDefault(hint => hint.Length > 0) ?? "";
        Error($"expected a {what} with one of the keys {Quoted.List(kinds)}, found {found}{hint}");
        return null;
    }

    /// <summary>All members, for objects whose keys are the user's own.</summary>
    public IEnumerable<(string Key, ValueReader Value)> Own()
    {
        _keysAreFree = true;
        return value.Members.Select(member => (member.Key, new ValueReader(member.Value, DefinitionPath.Member(path, member.Key), errors)));
    }

    /// <summary>The known keys in the order in which the object has them.</summary>
    public IEnumerable<string> Written() => value.Members.Select(member => member.Key).Where(_known.Contains).Distinct();

    /// <summary>Refuses keys that nobody asked for and keys that are there twice.</summary>
    public void End()
    {
        var first = new Dictionary<string, DefinitionPlace>(StringComparer.Ordinal);
        foreach (var member in value.Members)
        {
            string memberPath = DefinitionPath.Member(path, member.Key);
            if (!first.TryAdd(member.Key, member.Place))
            {
                errors.Add(member.Place, memberPath, $"the key is there twice, before at {first[member.Key]}: keep one");
            }
            else if (!_keysAreFree && !_known.Contains(member.Key))
            {
                string hint = NearestName.Hint(member.Key, _known);
                errors.Add(member.Place, memberPath, $"unknown key{(hint.Length == 0 ? "." : hint)} Known here: {Quoted.List(_known)}");
            }
        }
    }
}
