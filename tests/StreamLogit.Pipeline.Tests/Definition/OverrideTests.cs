using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class OverrideTests
{
    private const string Definition = """
        {
          "stream": "quay",
          "record": { "labelValues": { "a.b": 1, "c": 0 } },
          "features": [ { "number": "amount" }, { "category": [ "country", "channel" ] } ],
          "learning": { "bank": [ { "update": "sgd", "step": 0.5 } ] },
          "decision": { "cutoff": 0.2 }
        }
        """;

    [Theory]
    [InlineData("decision.cutoff=0.3")]
    [InlineData("decision={ \"cutoff\": 0.3 }")]
    [InlineData("decision={ \"cutoff\": 0.3, } // with a comment")]
    public void Set_Number_ReplacesIt(string argument) => Assert.Equal(0.3, Definitions.Read(Definition, [argument]).Engine.Decision.Cutoff);

    [Fact]
    public void Set_ItemOfAList_ReplacesIt() =>
        Assert.Equal(
            [new SgdSetting(0.01, 0, 0), new SgdSetting(0.03, 0, 0)],
            Definitions.Read(Definition, ["learning.bank[0].step=[0.01,0.03]"]).Engine.Learning.Bank);

    [Fact]
    public void Set_IndexAfterTheLast_AddsAnItem() =>
        Assert.Equal(
            [new SgdSetting(0.5, 0, 0), new SgdSetting(0.1, 0, 0)],
            Definitions.Read(Definition, ["learning.bank[1].update=sgd", "learning.bank[1].step=0.1"]).Engine.Learning.Bank);

    [Fact]
    public void Set_ItemWithinAnItem_ReplacesIt() =>
        Assert.Equal(["country", "shop"], Assert.IsType<CategoryFeature>(Definitions.Read(Definition, ["features[1].category[1]=shop"]).Engine.Features[1]).Fields);

    [Fact]
    public void Set_AbsentSection_IsAdded() => Assert.Equal(86_400_000_000, Definitions.Read(Definition, ["labels.wait=1d"]).Engine.Labels.WaitMicroseconds);

    [Fact]
    public void Set_QuotedKey_IsOneKey()
    {
        var values = Definitions.Read(Definition, ["record.labelValues[\"a.b\"]=0", "record.labelValues[\"x=\\\"\"]=1"]).Engine.Record.LabelValues;

        Assert.Equal((0, 1), (values["a.b"], values["x=\""]));
    }

    [Theory]
    [InlineData("stream=harbour", "harbour")]
    [InlineData("stream=a=b", "a=b")]
    [InlineData("stream=\"5\"", "5")]
    [InlineData("stream={not json", "{not json")]
    [InlineData("stream=two words", "two words")]
    public void Set_TextThatIsNotJson_IsAString(string argument, string expected) => Assert.Equal(expected, Definitions.Read(Definition, [argument]).Engine.Stream);

    [Fact]
    public void Set_Twice_TheLastCounts() => Assert.Equal(0.4, Definitions.Read(Definition, ["decision.cutoff=0.3", "decision.cutoff=0.4"]).Engine.Decision.Cutoff);

    [Fact]
    public void Set_OverAWrongValue_MakesItRight() =>
        Assert.Equal(0.3, Definitions.Read("""{ "stream": "q", "features": [ { "number": "a" } ], "decision": { "cutoff": 7, "cutoff": 8 } }""", ["decision={\"cutoff\":0.3}"]).Engine.Decision.Cutoff);

    [Fact]
    public void Set_WrongValue_IsPlacedAtTheOverrideAfterTheErrorsOfTheFile() =>
        Assert.Equal(
            [
                "quay.json:6:3: decison: unknown key; did you mean \"decision\"? Known here: \"$schema\", \"stream\", \"record\", \"features\", \"histories\", \"learning\", \"labels\", \"decision\", \"health\", \"kafka\", \"source\", \"scores\", \"rejects\", \"recording\", \"state\", \"listen\", \"webhook\"",
                "--set lerning.slots=16: lerning: unknown key; did you mean \"learning\"? Known here: \"$schema\", \"stream\", \"record\", \"features\", \"histories\", \"learning\", \"labels\", \"decision\", \"health\", \"kafka\", \"source\", \"scores\", \"rejects\", \"recording\", \"state\", \"listen\", \"webhook\"",
                "--set learning.slots=1000: learning.slots: expected a power of two from 16 to 67108864, found the number 1000",
            ],
            Definitions.Errors(Definition.Replace("\"decision\"", "\"decison\"", StringComparison.Ordinal), ["learning.slots=1000", "lerning.slots=16"]).Select(error => error.ToString()));

    [Theory]
    [InlineData("")]
    [InlineData("learning.slots")]
    [InlineData("=5")]
    [InlineData("[0]=5")]
    [InlineData(".a=5")]
    [InlineData("a..b=5")]
    [InlineData("a.=5")]
    [InlineData("a[=5")]
    [InlineData("a[]=5")]
    [InlineData("a[-1]=5")]
    [InlineData("a[1 ]=5")]
    [InlineData("a[99999999999]=5")]
    [InlineData("a[\"b]=5")]
    [InlineData("a[\"b\"=5")]
    [InlineData("a[\"\\x\"]=5")]
    [InlineData("a[\"\\")]
    [InlineData("a[0]b=5")]
    public void Set_WithoutAPath_IsRefused(string argument)
    {
        var error = Assert.Single(Definitions.Errors(Definition, [argument]));

        Assert.Equal(
            ($"--set {argument}", "an override is written path=value, as learning.bank[0].step=0.01"),
            (error.Place.ToString(), error.Message));
    }

    [Fact]
    public void Set_PathOfVeryManyParts_IsRefused()
    {
        string path = string.Join('.', Enumerable.Repeat("a", 200_000));

        Assert.StartsWith("an override is written path=value", Assert.Single(Definitions.Errors(Definition, [path + "=1"])).Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("features.number=5", "features", "is a list, in which \"number\" is nothing: give an index, from 0")]
    [InlineData("decision[0]=5", "decision", "is an object, in which [0] is nothing: name a key")]
    [InlineData("stream.name=x", "stream", "is the string \"quay\", which has no parts: override it as a whole")]
    [InlineData("learning.bank[0].step[0]=0.1", "learning.bank[0].step", "is the number 0.5, which has no parts: override it as a whole")]
    [InlineData("learning.bank[2].step=0.1", "learning.bank", "has 1 items, so that [2] would leave a gap: the next is [1]")]
    public void Set_PathThatLeadsNowhere_IsRefused(string argument, string path, string message)
    {
        var error = Assert.Single(Definitions.Errors(Definition, [argument]));

        Assert.Equal(($"--set {argument}", path, message), (error.Place.ToString(), error.Path, error.Message));
    }

    [Fact]
    public void Environment_Variables_OverrideTheFile()
    {
        var definition = Definitions.Read(Definition, environment: new()
        {
            ["STREAMLOGIT__decision__cutoff"] = "0.3",
            ["STREAMLOGIT__learning__bank__0__step"] = "[0.01,0.03]",
            ["STREAMLOGIT__record__labelValues__7"] = "1",
            ["STREAMLOGIT_OTHER"] = "x",
            ["streamlogit__stream"] = "x",
            ["PATH"] = "/bin",
        });

        Assert.Equal(("quay", 0.3, 1), (definition.Engine.Stream, definition.Engine.Decision.Cutoff, definition.Engine.Record.LabelValues["7"]));
        Assert.Equal([new SgdSetting(0.01, 0, 0), new SgdSetting(0.03, 0, 0)], definition.Engine.Learning.Bank);
    }

    [Fact]
    public void Environment_Indices_GoByTheirNumber()
    {
        var environment = Enumerable.Range(0, 12).Reverse().ToDictionary(i => $"STREAMLOGIT__features__{i}", i => $$"""{ "number": "f{{i}}" }""");

        Assert.Equal(
            Enumerable.Range(0, 12).Select(i => $"f{i}"),
            Definitions.Read("""{ "stream": "q" }""", environment: environment).Engine.Features.Select(feature => feature.Name));
    }

    [Fact]
    public void Environment_AndSet_TheArgumentCounts() =>
        Assert.Equal(0.4, Definitions.Read(Definition, ["decision.cutoff=0.4"], new() { ["STREAMLOGIT__decision__cutoff"] = "0.3" }).Engine.Decision.Cutoff);

    [Theory]
    [InlineData("STREAMLOGIT__")]
    [InlineData("STREAMLOGIT____cutoff")]
    [InlineData("STREAMLOGIT__decision__")]
    public void Environment_NameWithoutAPath_IsRefused(string name)
    {
        var error = Assert.Single(Definitions.Errors(Definition, environment: new() { [name] = "1" }));

        Assert.Equal(
            ($"environment variable {name}", "a variable is named STREAMLOGIT__path__part, with the keys as the definition writes them"),
            (error.Place.ToString(), error.Message));
    }

    [Fact]
    public void Environment_WrongCase_IsAnUnknownKey() =>
        Assert.StartsWith(
            "environment variable STREAMLOGIT__DECISION__cutoff: DECISION: unknown key; did you mean \"decision\"?",
            Assert.Single(Definitions.Errors(Definition, environment: new() { ["STREAMLOGIT__DECISION__cutoff"] = "1" })).ToString(),
            StringComparison.Ordinal);

    [Fact]
    public void Set_LongOrOfManyLines_IsPlacedOnOneShortLine()
    {
        var error = Assert.Single(Definitions.Errors(Definition, ["stream.x=a\nb" + new string('c', 1000)]));

        Assert.StartsWith("--set stream.x=a b", error.Place.Source, StringComparison.Ordinal);
        Assert.EndsWith("...", error.Place.Source, StringComparison.Ordinal);
        Assert.Equal(103, error.Place.Source.Length);
    }
}
