using System.Globalization;
using System.Text;
using System.Text.Json;

namespace StreamLogit.Pipeline.Definition;

/// <summary>A value that takes the place of one in the definition's file.</summary>
/// <param name="Parts">The path of the value.</param>
/// <param name="Value">The value, whose place is the override.</param>
internal sealed record DefinitionOverride(IReadOnlyList<PathPart> Parts, PositionedValue Value)
{
    /// <summary>How the names of environment variables begin that override a definition.</summary>
    public const string VariablePrefix = "STREAMLOGIT__";

    private const string Separator = "__";
    private const int LongestPlace = 100;
    private const int MostParts = 32;

    /// <summary>Reads <c>path=value</c>, or adds an error and returns null.</summary>
    public static DefinitionOverride? FromArgument(string argument, DefinitionErrors errors)
    {
        var place = PlaceOf($"--set {argument}");
        var path = DefinitionPath.Parse(argument);
        if (path is not var (parts, length) || length == argument.Length || parts.Count > MostParts)
        {
            errors.Add(place, "", "an override is written path=value, as learning.bank[0].step=0.01");
            return null;
        }
        return new DefinitionOverride(parts, ReadValue(argument[(length + 1)..], place));
    }

    /// <summary>Reads the variables whose names begin with <see cref="VariablePrefix"/>, in the order of their paths.</summary>
    public static IEnumerable<DefinitionOverride> FromEnvironment(IReadOnlyDictionary<string, string> environment, DefinitionErrors errors)
    {
        var found = new List<DefinitionOverride>();
        foreach (var (name, value) in environment)
        {
            if (!name.StartsWith(VariablePrefix, StringComparison.Ordinal)) continue;
            var place = PlaceOf($"environment variable {name}");
            string[] parts = name[VariablePrefix.Length..].Split(Separator);
            if (parts.Any(string.IsNullOrEmpty) || parts.Length > MostParts)
            {
                errors.Add(place, "", "a variable is named STREAMLOGIT__path__part, with the keys as the definition writes them");
                continue;
            }
            found.Add(new DefinitionOverride([.. parts.Select(PartOf)], ReadValue(value, place)));
        }
        found.Sort((left, right) => Compare(left.Parts, right.Parts));
        return found;
    }

    private static PathPart PartOf(string text) =>
        new(text, int.TryParse(text, NumberStyles.None, CultureInfo.InvariantCulture, out int index) ? index : null);

    // A list is filled from its first item on, so indices go by their number; the rest only has to be the same on every machine.
    private static int Compare(IReadOnlyList<PathPart> left, IReadOnlyList<PathPart> right)
    {
        for (int i = 0; i < Math.Min(left.Count, right.Count); i++)
        {
            int order = left[i].Index is int l && right[i].Index is int r ? l.CompareTo(r) : string.CompareOrdinal(left[i].Key, right[i].Key);
            if (order != 0) return order;
        }
        return left.Count.CompareTo(right.Count);
    }

    private static PositionedValue ReadValue(string text, DefinitionPlace place)
    {
        byte[] utf8 = Encoding.UTF8.GetBytes(text);
        return PositionedJson.Parse(utf8, TextPlaces.Whole(place, utf8), out _)
            ?? PositionedValue.Scalar(JsonValueKind.String, place, text);
    }

    private static DefinitionPlace PlaceOf(string text)
    {
        string line = text.ReplaceLineEndings(" ");
        return new DefinitionPlace(line.Length <= LongestPlace ? line : string.Concat(line.AsSpan(0, LongestPlace), "..."));
    }
}
