using System.Text.Json;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Features.Text;

public class TextEncodingTests
{
    private const int Slots = 1 << 10;

    [Theory]
    [InlineData("Free money, FREE!", 1, new[] { "free", "money" })]
    [InlineData("Free money, FREE!", 2, new[] { "free money", "money free" })]
    [InlineData("one two  three\n\tfour", 3, new[] { "one two three", "two three four" })]
    [InlineData("one two", 3, new string[0])]
    [InlineData("café-bar № 5 日本", 1, new[] { "café", "bar", "№", "5", "日本" })]
    [InlineData("...", 1, new string[0])]
    [InlineData("", 1, new string[0])]
    public void Words_Text_AreItsRuns(string text, int length, string[] expected) =>
        AssertNGrams(new TextFeature("t") { WordLengths = [length] }, text, expected);

    [Theory]
    [InlineData("Abab", 2, new[] { "ab", "ba" })]
    [InlineData(" A  b! ", 2, new[] { "a ", " b", "b!" })]
    [InlineData("née", 2, new[] { "né", "ée" })]
    [InlineData("日本語", 3, new[] { "日本語" })]
    [InlineData("ab", 3, new string[0])]
    public void Characters_Text_AreItsRuns(string text, int length, string[] expected) =>
        AssertNGrams(new TextFeature("t") { CharacterLengths = [length] }, text, expected);

    [Fact]
    public void Encode_RandomTexts_IsWhatAPlainSplitGives()
    {
        var random = new Random(3);
        string[] pieces = ["a", "B", "é", "日", " ", "  ", "-", "7", "\t", "xyz"];
        for (int round = 0; round < 500; round++)
        {
            string text = string.Concat(Enumerable.Range(0, random.Next(30)).Select(_ => pieces[random.Next(pieces.Length)]));
            int length = random.Next(1, 5);
            string[] words = [.. new string([.. text.Select(c => char.IsAsciiLetterOrDigit(c) || c > 127 ? char.ToLowerInvariant(c) : ' ')]).Split(' ', StringSplitOptions.RemoveEmptyEntries)];
            AssertNGrams(
                new TextFeature("t") { WordLengths = [length] }, text,
                [.. Enumerable.Range(0, Math.Max(0, words.Length - length + 1)).Select(i => string.Join(' ', words[i..(i + length)])).Distinct()]);
            string plain = string.Join(' ', text.Split([' ', '\t'], StringSplitOptions.RemoveEmptyEntries)).ToLowerInvariant();
            AssertNGrams(
                new TextFeature("t") { CharacterLengths = [length] }, text,
                [.. Enumerable.Range(0, Math.Max(0, plain.Length - length + 1)).Select(i => plain.Substring(i, length)).Distinct()]);
        }
    }

    [Fact]
    public void Encode_MoreThanMost_TakesTheFirst() =>
        AssertNGrams(new TextFeature("t") { WordLengths = [1], Most = 3 }, "a b a c d e", ["a", "b", "c"]);

    [Fact]
    public void Encode_SeveralLengths_ShareOneLength()
    {
        var encoding = new Encoded(new TextFeature("t") { WordLengths = [1, 2], CharacterLengths = [3] });
        var (slots, values) = encoding.Encode(Record("to be or not to be"));
        Assert.Equal(4 + 4 + 13, slots.Length); // "to be" and the runs in it come twice and count once
        Assert.All(values, v => Assert.Equal(1 / Math.Sqrt(21), v));
        Assert.Equal(slots.Distinct().Count(), encoding.Encoder.UsedSlots().Count());
        Assert.Contains(encoding.Encoder.UsedSlots(), s => s.Name == "t: be or");
    }

    [Fact]
    public void Encode_NoText_SwitchesOnTheCoefficientForIt()
    {
        var encoding = new Encoded(new TextFeature("t") { WordLengths = [1] });
        Assert.Equal([Slots], encoding.Encode("""{"id":"1","time":"2026-01-01T00:00:00Z"}""").Slots);
        Assert.Equal("t missing", Assert.Single(encoding.Encoder.UsedSlots()).Name);
    }

    private static void AssertNGrams(TextFeature feature, string text, string[] expected)
    {
        string of = feature.WordLengths.IsEmpty ? $"{feature.CharacterLengths[0]} characters" : $"{feature.WordLengths[0]} words";
        var hashed = new HashedSlots(Slots, 0);
        ulong seed = hashed.SeedOf($"text of t in {of}");
        var (slots, values) = new Encoded(feature).Encode(Record(text));
        Assert.Equal(expected.Select(run => hashed.SlotOf(HashedSlots.Combine(seed, FieldHash.Of(System.Text.Encoding.UTF8.GetBytes(run))))), slots);
        Assert.All(values, v => Assert.Equal(1 / Math.Sqrt(expected.Length), v));
    }

    private static string Record(string text) => $$"""{"id":"1","time":"2026-01-01T00:00:00Z","t":{{JsonSerializer.Serialize(text)}}}""";
}
