using System.Text.Json;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Puts overrides into the tree of a definition.</summary>
internal static class OverriddenTree
{
    /// <summary>The tree with the value in its place, or as it was if there is no such place, which is an error.</summary>
    public static PositionedValue With(PositionedValue root, DefinitionOverride change, DefinitionErrors errors) =>
        Put(root, "", change, 0, errors) ?? root;

    private static PositionedValue? Put(PositionedValue? target, string path, DefinitionOverride change, int depth, DefinitionErrors errors)
    {
        if (depth == change.Parts.Count) return change.Value;
        var place = change.Value.Place;
        var part = change.Parts[depth];
        target ??= part.Index is null ? PositionedValue.Object(place, []) : PositionedValue.List(place, []);
        switch (target.Kind)
        {
            case JsonValueKind.Object when part.Key is not null: return PutMember(target, path, part.Key, change, depth, errors);
            case JsonValueKind.Array when part.Index is not null: return PutItem(target, path, part.Index.Value, change, depth, errors);
            case JsonValueKind.Object:
                errors.Add(place, path, $"is an object, in which [{part.Index}] is nothing: name a key");
                return null;
            case JsonValueKind.Array:
                errors.Add(place, path, $"is a list, in which {Quoted.Text(part.Key!)} is nothing: give an index, from 0");
                return null;
            default:
                errors.Add(place, path, $"is {target.Describe()}, which has no parts: override it as a whole");
                return null;
        }
    }

    private static PositionedValue? PutMember(
        PositionedValue target, string path, string key, DefinitionOverride change, int depth, DefinitionErrors errors)
    {
        var old = target.Members.LastOrDefault(member => member.Key == key);
        var value = Put(old?.Value, DefinitionPath.Member(path, key), change, depth + 1, errors);
        if (value is null) return null;
        var member = old is null ? new PositionedMember(key, change.Value.Place, value) : old with { Value = value };
        return target with { Members = old is null ? target.Members.Add(member) : target.Members.Replace(old, member, ReferenceEqualityComparer.Instance) };
    }

    private static PositionedValue? PutItem(
        PositionedValue target, string path, int index, DefinitionOverride change, int depth, DefinitionErrors errors)
    {
        int count = target.Items.Length;
        if (index > count)
        {
            errors.Add(change.Value.Place, path, $"has {count} items, so that [{index}] would leave a gap: the next is [{count}]");
            return null;
        }
        var value = Put(index < count ? target.Items[index] : null, DefinitionPath.Item(path, index), change, depth + 1, errors);
        if (value is null) return null;
        return target with { Items = index < count ? target.Items.SetItem(index, value) : target.Items.Add(value) };
    }
}
