using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class HistoryFeatureTests
{
    private const long Hour = 3_600_000_000;

    [Fact]
    public void History_ListOfHalfLives_MakesAFeatureEach()
    {
        var features = Read("""{ "history": "mean", "per": [ "card", "shop" ], "of": "amount", "halfLife": [ "1h", "90m" ], "scale": "rank" }""");

        Assert.Equal(["mean of amount per card & shop over 1h", "mean of amount per card & shop over 90m"], features.Select(f => f.Name));
        Assert.Equal([Hour, 3 * Hour / 2], features.Select(f => f.HalfLifeMicroseconds));
        Assert.All(features, f => Assert.Equal((HistoryKind.Mean, "amount", NumberScale.Rank), (f.Kind, f.Of, f.Scale)));
        Assert.All(features, f => Assert.Equal(["card", "shop"], f.Per));
    }

    [Fact]
    public void History_Defaults_AreThoseOfTheKind()
    {
        Assert.Equal(NumberScale.StandardLog1p, Assert.Single(Read("""{ "history": "gap", "per": "card" }""")).Scale);
        var fresh = Assert.Single(Read("""{ "history": "new", "per": "card", "of": "shop" }"""));
        Assert.Equal((720 * Hour, NumberScale.None, "new of shop per card over 30d"), (fresh.WithinMicroseconds, fresh.Scale, fresh.Name));
        var rate = Assert.Single(Read("""{ "history": "rate", "per": "card", "halfLife": "1d" }"""));
        Assert.Equal((NumberScale.LogOdds, 10.0), (rate.Scale, rate.Prior));
        Assert.Equal(32, Assert.Single(Read("""{ "history": "distinct", "per": "card", "of": "shop", "halfLife": "1d" }""")).Values);
    }

    [Fact]
    public void History_OwnNumbers_AreTaken()
    {
        Assert.Equal(2.5, Assert.Single(Read("""{ "history": "rate", "per": "card", "halfLife": "1d", "prior": 2.5, "scale": "none" }""")).Prior);
        Assert.Equal(64, Assert.Single(Read("""{ "history": "distinct", "per": "card", "of": "shop", "halfLife": "1d", "values": 64 }""")).Values);
        Assert.Equal(2 * Hour, Assert.Single(Read("""{ "history": "new", "per": "card", "of": "shop", "within": "2h" }""")).WithinMicroseconds);
        Assert.Equal(5L << 20, Definitions.ReadWith("\"histories\": { \"memoryMiB\": 5 }").Engine.Histories.MemoryBytes);
    }

    [Theory]
    [InlineData("""{ "history": "cuont", "per": "card" }""", "features[0].history: expected one of \"count\", \"sum\", \"mean\", \"deviation\", \"gap\", \"distinct\", \"new\", \"rate\", found the string \"cuont\"; did you mean \"count\"?")]
    [InlineData("""{ "history": "gap" }""", "features[0]: the key \"per\" is missing: the field whose values have a history each, or a list of fields")]
    [InlineData("""{ "history": "sum", "per": "card", "halfLife": "1h" }""", "features[0]: the key \"of\" is missing: the numeric field that it looks at")]
    [InlineData("""{ "history": "count", "per": "card", "of": "amount", "halfLife": "1h" }""", "features[0].of: a history of the kind \"count\" takes no \"of\": leave it out")]
    [InlineData("""{ "history": "gap", "per": "card", "halfLife": "1h" }""", "features[0].halfLife: a history of the kind \"gap\" takes no \"halfLife\": leave it out")]
    [InlineData("""{ "history": "count", "per": "card", "halfLife": "1h", "within": "1h", "prior": 3, "values": 9 }""",
        "features[0].within: a history of the kind \"count\" takes no \"within\": leave it out",
        "features[0].prior: a history of the kind \"count\" takes no \"prior\": leave it out",
        "features[0].values: a history of the kind \"count\" takes no \"values\": leave it out")]
    [InlineData("""{ "history": "count", "per": "card", "halfLife": "1h", "scale": "log-odds" }""", "features[0].scale: only a history of the kind \"rate\" takes the scale \"log-odds\": name another")]
    [InlineData("""{ "history": "new", "per": [ "card", "shop" ], "of": "shop" }""", "features[0].of: the field \"shop\" is a part of the key, in whose history it is always the same: name another")]
    [InlineData("""{ "history": "count", "per": "card", "halfLife": [ "1h", "60m" ] }""", "features[0].halfLife[1]: the half-life \"1h\" is as long: keep one")]
    [InlineData("""{ "history": "count", "per": "label", "halfLife": "1h" }""", "features[0].per: the field \"label\" holds the label, which is not known when an event is scored: name another")]
    [InlineData("""{ "history": "count", "per": "card", "halfLife": "10ms" }""", "features[0].halfLife: expected a duration from 1s to 36525d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"10ms\"")]
    [InlineData("""{ "bucket": "amount" }""", "features[0]: expected either \"edges\", the numbers at which it is cut, or \"quantiles\", into how many buckets")]
    [InlineData("""{ "bucket": "amount", "edges": [ 1, 1 ] }""", "features[0].edges[1]: expected a number above the edge before it, found the number 1")]
    [InlineData("""{ "bucket": "amount", "quantiles": 1 }""", "features[0].quantiles: expected a whole number from 2 to 100, found the number 1")]
    [InlineData("""{ "text": "remark", "words": [ 1, 1 ] }""", "features[0].words[1]: the number 1 is there twice: keep one")]
    [InlineData("""{ "text": "remark", "characters": 9 }""", "features[0].characters: expected a whole number from 1 to 8, found the number 9")]
    public void Wrong_IsRefused(string feature, params string[] expected) =>
        Assert.Equal(
            expected,
            Definitions.Errors($"{{ \"stream\": \"quay\", \"features\": [\n{feature} ] }}").Select(error => $"{error.Path}: {error.Message}"));

    [Theory]
    [InlineData("""{ "history": "count", "per": "card", "of": "amount", "halfLife": "1h" }""")]
    [InlineData("""{ "history": "sum", "per": "card", "halfLife": "1h" }""")]
    [InlineData("""{ "history": "gap", "per": "card", "halfLife": "1h" }""")]
    [InlineData("""{ "history": "count", "per": "card" }""")]
    [InlineData("""{ "history": "count", "per": "card", "halfLife": "1h", "prior": 3 }""")]
    [InlineData("""{ "history": "count", "per": "card", "halfLife": "1h", "values": 9 }""")]
    [InlineData("""{ "history": "count", "per": "card", "halfLife": "1h", "within": "1h" }""")]
    [InlineData("""{ "history": "count", "per": "card", "halfLife": "1h", "scale": "log-odds" }""")]
    [InlineData("""{ "bucket": "amount" }""")]
    [InlineData("""{ "bucket": "amount", "edges": [ 1 ], "quantiles": 4 }""")]
    [InlineData("""{ "text": "remark", "words": 6 }""")]
    public void Wrong_IsRefusedByTheSchemaToo(string feature) =>
        Assert.False(SchemaFile.Accepts($$"""{ "stream": "quay", "features": [ {{feature}} ] }"""));

    [Fact]
    public void BucketAndText_AreTaken()
    {
        var definition = Definitions.Read("""
            { "stream": "quay", "features": [
              { "bucket": "a", "edges": [ -1, 0, 2.5 ] }, { "bucket": "b", "quantiles": 10 },
              { "text": "c" }, { "text": "d", "characters": [ 3, 4 ], "most": 50 }, { "text": "e", "words": 2, "characters": 3 } ] }
            """).Engine.Features;

        Assert.Equal([-1, 0, 2.5], Assert.IsType<BucketFeature>(definition[0]).Edges);
        Assert.Equal(10, Assert.IsType<BucketFeature>(definition[1]).Quantiles);
        Assert.Equal("1;;200", Lengths(definition[2]));
        Assert.Equal(";3,4;50", Lengths(definition[3]));
        Assert.Equal("2;3;200", Lengths(definition[4]));

        static string Lengths(FeatureOptions feature)
        {
            var text = Assert.IsType<TextFeature>(feature);
            return $"{string.Join(',', text.WordLengths)};{string.Join(',', text.CharacterLengths)};{text.Most}";
        }
    }

    private static List<HistoryFeature> Read(string feature) =>
        [.. Definitions.Read($$"""{ "stream": "quay", "features": [ {{feature}} ] }""").Engine.Features.Cast<HistoryFeature>()];
}
