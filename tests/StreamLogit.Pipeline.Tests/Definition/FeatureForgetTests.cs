using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary><c>forget</c> of single features.</summary>
public sealed class FeatureForgetTests
{
    private const long Day = 86_400_000_000;

    public static TheoryData<string> Kinds =>
    [
        """ "number": "a" """, """ "category": ["a", "b"] """, """ "cycle": "time", "period": "1d" """, """ "cycle": "angle", "period": 360 """,
        """ "history": "gap", "per": "card" """, """ "history": "count", "per": "card", "halfLife": ["1h", "1d"] """, """ "history": "new", "per": "card", "of": "shop" """,
        """ "bucket": "a", "edges": [1] """, """ "bucket": "a", "quantiles": 4 """, """ "text": "a" """,
    ];

    [Theory]
    [MemberData(nameof(Kinds))]
    public void Forget_OfEveryKind_IsTakenAndChangesNoMeaning(string keys)
    {
        var plain = Read($"{{ {keys} }}");
        var forgetting = Read($$"""{ {{keys}}, "forget": "2d" }""");

        Assert.All(plain, feature => Assert.Equal(0, feature.ForgetHalfLifeMicroseconds));
        Assert.All(forgetting, feature => Assert.Equal(2 * Day, feature.ForgetHalfLifeMicroseconds));
        Assert.Equal(plain.Select(feature => (feature.Name, feature.Identity)), forgetting.Select(feature => (feature.Name, feature.Identity)));
    }

    [Theory]
    [InlineData("\"1ms\"", "the string \"1ms\"")]
    [InlineData("\"36526d\"", "the string \"36526d\"")]
    [InlineData("86400", "the number 86400")]
    [InlineData("[\"1d\"]", "a list")]
    public void Forget_Wrong_IsRefused(string value, string found) =>
        Assert.Equal(
            $"features[0].forget: expected a duration from 1s to 36525d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found {found}",
            Assert.Single(Errors($$"""{ "category": "a", "forget": {{value}} }""")));

    [Fact]
    public void Forget_OfTheSameFeatureTwice_IsRefused() =>
        Assert.Equal(
            "features[1]: is the same feature as features[0]: keep one",
            Assert.Single(Errors("""{ "category": "a", "forget": "1d" }, { "category": "a", "forget": "2d" }""")));

    [Fact]
    public void Forget_WithNewton_IsRefused()
    {
        string[] bank = ["""{ "update": "sgd", "step": 0.1, "forget": "1d" }""", """{ "update": "newton" }"""];
        Assert.Equal(
            "learning.bank[1].update: newton learns all coefficients together and cannot let those of one feature fade, as \"forget\" of the feature \"amount\" says: leave out either."
            + " An entry of the bank can have \"forget\" for all features",
            Assert.Single(Errors("""{ "number": "b" }, { "number": "amount", "forget": "1d" }""", string.Join(", ", bank))));
        Assert.Single(Definitions.Read(With("""{ "number": "amount", "forget": "1d" }""", bank[0])).Engine.Learning.Bank);
    }

    [Fact]
    public void Forget_DefaultBank_HasNoNewton()
    {
        Assert.Contains(Definitions.Read(Definitions.Smallest).Engine.Learning.Bank, setting => setting is NewtonSetting);
        foreach (string learning in new[] { "", """, "learning": { "bank": "default" }""" })
        {
            var definition = Definitions.Read($$"""{ "stream": "quay", "features": [ { "number": "amount", "forget": "1d" } ]{{learning}} }""");
            Assert.DoesNotContain(definition.Engine.Learning.Bank, setting => setting is NewtonSetting);
        }
    }

    private static FeatureOptions[] Read(string features) => [.. Definitions.Read($$"""{ "stream": "quay", "features": [ {{features}} ] }""").Engine.Features];

    private static string With(string features, string bank) => $$"""{ "stream": "quay", "features": [ {{features}} ], "learning": { "bank": [ {{bank}} ] } }""";

    private static IEnumerable<string> Errors(string features, string bank = """{ "update": "sgd", "step": 0.1 }""") =>
        Definitions.Errors(With(features, bank)).Select(error => $"{error.Path}: {error.Message}");
}
