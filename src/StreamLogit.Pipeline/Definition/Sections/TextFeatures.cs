using System.Collections.Immutable;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>Features of the kind <c>text</c>.</summary>
internal static class TextFeatures
{
    private const int LongestWords = 5;
    private const int LongestCharacters = 8;
    private const int MostNGrams = 10_000;

    public static TextFeature? Read(ObjectReader section, string? field)
    {
        var words = Lengths(section.Optional("words"), LongestWords);
        var characters = Lengths(section.Optional("characters"), LongestCharacters);
        int? most = section.Optional("most")?.Whole(1, MostNGrams);
        if (field is null || words is null || characters is null) return null;
        var feature = new TextFeature(field) { WordLengths = words.Value, CharacterLengths = characters.Value };
        if (words.Value.IsEmpty && characters.Value.IsEmpty) feature = feature with { WordLengths = [1] };
        return most is null ? feature : feature with { Most = most.Value };
    }

    private static ImmutableArray<int>? Lengths(ValueReader? value, int longest)
    {
        if (value is null) return [];
        if (value.OneOrList("whole numbers", longest) is not { } items) return null;
        var lengths = ImmutableArray.CreateBuilder<int>();
        foreach (var item in items)
        {
            if (item.Whole(1, longest) is not { } length) continue;
            if (lengths.Contains(length)) item.Error($"{item.Value.Describe()} is there twice: keep one");
            else lengths.Add(length);
        }
        return lengths.Count == items.Length ? lengths.ToImmutable() : null;
    }
}
