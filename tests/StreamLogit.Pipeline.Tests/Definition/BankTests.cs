using System.Collections.Immutable;
using StreamLogit.Engine;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class BankTests
{
    [Fact]
    public void Bank_Lists_GiveTheirProductWithTheLastWrittenKeyFastest()
    {
        var bank = Read("""[ { "stepDecay": [ 0, 0.5 ], "update": "sgd", "step": [ 0.1, 0.2, 0.3 ] } ]""");

        Assert.Equal(
            [
                new SgdSetting(0.1, 0, 0), new SgdSetting(0.2, 0, 0), new SgdSetting(0.3, 0, 0),
                new SgdSetting(0.1, 0.5, 0), new SgdSetting(0.2, 0.5, 0), new SgdSetting(0.3, 0.5, 0),
            ],
            bank);
    }

    [Fact]
    public void Bank_Entries_FollowEachOther() =>
        Assert.Equal(
            [new SgdSetting(0.2, 0, 0), new SgdSetting(0.1, 0, 0)],
            Read("""[ { "update": "sgd", "step": 0.2 }, { "update": "sgd", "step": 0.1 } ]"""));

    [Fact]
    public void Bank_EveryRuleWithEveryNumber_IsThatSetting() =>
        Assert.Equal<SettingOptions>(
            [
                new SgdSetting(0.1, 0.25, 1e-6) { IsOvershootProof = true, ForgetHalfLifeMicroseconds = 86_400_000_000 },
                new AdagradSetting(0.2, 5000) { ForgetHalfLifeMicroseconds = 2 * 86_400_000_000 },
                new FtrlSetting(0.3, 2, 0.5, 0.25) { ForgetHalfLifeMicroseconds = 3 * 86_400_000_000 },
                new NewtonSetting(0.999, 10) { ForgetHalfLifeMicroseconds = 4 * 86_400_000_000 },
            ],
            Read("""
                [
                  { "update": "sgd", "step": 0.1, "stepDecay": 0.25, "weightDecay": 1e-6, "overshootProof": true, "forget": "1d" },
                  { "update": "adagrad", "step": 0.2, "sumHalfLife": 5000, "forget": "2d" },
                  { "update": "ftrl", "step": 0.3, "beta": 2, "l1": 0.5, "l2": 0.25, "forget": "3d" },
                  { "update": "newton", "forgetting": 0.999, "prior": 10, "forget": "4d" },
                ]
                """));

    [Fact]
    public void Bank_EveryRuleWithoutNumbers_HasTheDefaults() =>
        Assert.Equal<SettingOptions>(
            [new SgdSetting(0.1, 0, 0), new AdagradSetting(0.1, 0), new FtrlSetting(0.1, 1, 0, 0), new NewtonSetting(1, 1)],
            Read("""
                [ { "update": "sgd", "step": 0.1 }, { "update": "adagrad", "step": 0.1 }, { "update": "ftrl", "step": 0.1 }, { "update": "newton" } ]
                """));

    [Fact]
    public void Bank_ListsOfDurationsAndFlags_GiveTheirProduct() =>
        Assert.Equal(
            ["sgd step=0.1 stepDecay=0 weightDecay=0 forget=1d", "sgd step=0.1 stepDecay=0 weightDecay=0 overshootProof forget=1d",
                "sgd step=0.1 stepDecay=0 weightDecay=0 forget=1w", "sgd step=0.1 stepDecay=0 weightDecay=0 overshootProof forget=1w"],
            Read("""[ { "update": "sgd", "step": 0.1, "forget": [ "1d", "7d" ], "overshootProof": [ false, true ] } ]""").Select(setting => setting.Name));

    [Theory]
    [InlineData("", 0, true)]
    [InlineData("n", 2, false)]
    [InlineData("nt", 4, false)]
    [InlineData("nc", 5, false)]
    [InlineData("256 numbers", 512, false)]
    [InlineData("256 numbers and t", 514, true)]
    public void Newton_NeedsFittingFeatures(string features, int coefficients, bool isWrong)
    {
        var list = new List<string> { """{ "category": "k" }""" };
        if (features.Contains('n', StringComparison.Ordinal)) list.Add("""{ "number": "x" }""");
        if (features.EndsWith('t')) list.Add("""{ "cycle": "time", "period": "1d" }""");
        if (features.EndsWith('c')) list.Add("""{ "cycle": "angle", "period": 360 }""");
        if (features.StartsWith("256", StringComparison.Ordinal)) list.AddRange(Enumerable.Range(1, 255).Select(i => $$"""{ "number": "x{{i}}" }"""));
        string definition = $$"""{ "stream": "q", "features": [ {{string.Join(", ", list)}} ], "learning": { "slots": 16 } }""";
        string[] newton = ["learning.bank=[{\"update\":\"newton\"}]"];
        var engine = Definitions.Read(definition).Engine;
        engine = engine with { Learning = engine.Learning with { Bank = [new NewtonSetting(1, 1)] } };

        // The engine is the judge of what it can take.
        if (!isWrong)
        {
            _ = new ScoringEngine(engine);
            Assert.Equal(engine.Learning.Bank, Definitions.Read(definition, newton).Engine.Learning.Bank);
            return;
        }
        Assert.Throws<ArgumentException>(() => new ScoringEngine(engine));
        var error = Assert.Single(Definitions.Errors(definition, newton));
        Assert.Equal("learning.bank[0].update", error.Path);
        Assert.Equal($"newton learns only the coefficients of numbers and cycles, from 1 to 512 of them, and these features have {coefficients}: choose another rule", error.Message);
    }

    [Fact]
    public void Bank_Default_IsTheDefaultBankForTheFeatures()
    {
        Assert.Equal(DefaultBank.DenseSettings, Read("\"default\""));

        // newton does not learn categories, and takes time in proportion to the square of the numbers.
        string[] unsuitable = [NumbersAnd(1, """{ "category": "k" }"""), NumbersAnd(33, """{ "cycle": "time", "period": "1d" }"""), """{ "category": "k" }"""];
        foreach (string features in unsuitable)
        {
            var engine = Definitions.Read($$"""{ "stream": "q", "features": [ {{features}} ], "learning": { "slots": 16, "bank": "default" } }""").Engine;
            Assert.Equal(DefaultBank.Settings, engine.Learning.Bank);
            _ = new ScoringEngine(engine);
        }

        static string NumbersAnd(int count, string feature) =>
            string.Concat(Enumerable.Range(0, count).Select(i => $$"""{ "number": "x{{i}}" }, """)) + feature;
    }

    [Fact]
    public void Bank_SixtyFourSettings_AreTheMost()
    {
        Assert.Equal(64, Read(Steps(64)).Length);
        Assert.Equal("learning.bank[0].step: expected at most 64 values, found 65", Error(Steps(65)));
        Assert.Equal("learning.bank: makes 65 settings; a bank has at most 64", Error(Steps(64)[..^1] + ", { \"update\": \"sgd\", \"step\": 1 } ]"));
    }

    [Fact]
    public void Bank_HugeProduct_IsRefusedBeforeItIsMade()
    {
        string values = string.Join(',', Enumerable.Range(1, 64).Select(i => $"{i}e-6"));

        Assert.Equal(
            "learning.bank: makes 262144 settings; a bank has at most 64",
            Error($$"""[ { "update": "sgd", "step": [{{values}}], "stepDecay": [{{values}}], "weightDecay": [{{values}}] } ]"""));
    }

    [Theory]
    [InlineData("\"none\"", "learning.bank: expected one of \"default\", found the string \"none\"")]
    [InlineData("[]", "learning.bank: expected a list of entries, each an update rule with its numbers (or the string \"default\"), at least one, found a list")]
    [InlineData("4", "learning.bank: expected a list of entries, each an update rule with its numbers (or the string \"default\"), at least one, found the number 4")]
    [InlineData("[ \"default\" ]", "learning.bank[0]: expected an object, found the string \"default\"")]
    [InlineData("[ { \"step\": 0.1 } ]", "learning.bank[0]: the key \"update\" is missing: it names the update rule, one of ")]
    [InlineData("[ { \"update\": \"sdg\", \"step\": 0.1 } ]", "learning.bank[0].update: expected one of ", "; did you mean \"sgd\"?")]
    [InlineData("[ { \"update\": true } ]", "learning.bank[0].update: expected one of ", ", found true")]
    [InlineData("[ { \"update\": \"sgd\" } ]", "learning.bank[0]: the key \"step\" is missing: a number above 0, at most 1000000, or a list of them")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": [] } ]", "learning.bank[0].step: expected a list of values, at least one, found a list")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0 } ]", "learning.bank[0].step: expected a number above 0, at most 1000000, found the number 0")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 1e309 } ]", "learning.bank[0].step: expected a number above 0, at most 1000000 that a double can hold, at most 1.7976931348623157E+308, found the number 1e309")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": [ 0.1, \"0.2\" ] } ]", "learning.bank[0].step[1]: expected a number above 0, at most 1000000, found the string \"0.2\"")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": [ 0.1, 1e-1 ] } ]", "learning.bank[0].step[1]: the number 1e-1 is there twice: keep one")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"stepDecay\": 1.1 } ]", "learning.bank[0].stepDecay: expected a number from 0 to 1, found the number 1.1")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"weightDecay\": -1e-6 } ]", "learning.bank[0].weightDecay: expected a number, 0 or more, found the number -1e-6")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"weightDecay\": [ 0, -0 ] } ]", "learning.bank[0].weightDecay[1]: the number -0 is there twice: keep one")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 1000001 } ]", "learning.bank[0].step: expected a number above 0, at most 1000000, found the number 1000001")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"overshootProof\": 1 } ]", "learning.bank[0].overshootProof: expected true or false, found the number 1")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"forget\": \"0s\" } ]", "learning.bank[0].forget: expected a duration from 1s to 36525d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"0s\"")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"forget\": [ \"1d\", \"24h\" ] } ]", "learning.bank[0].forget[1]: the string \"24h\" is there twice: keep one")]
    [InlineData("[ { \"update\": \"adagrad\" } ]", "learning.bank[0]: the key \"step\" is missing: a number above 0, at most 1000000, or a list of them")]
    [InlineData("[ { \"update\": \"adagrad\", \"step\": 0.1, \"sumHalfLife\": -1 } ]", "learning.bank[0].sumHalfLife: expected a number, 0 or more, found the number -1")]
    [InlineData("[ { \"update\": \"adagrad\", \"step\": 0.1, \"weightDecay\": 0 } ]", "learning.bank[0].weightDecay: unknown key. Known here: \"update\", \"step\", \"sumHalfLife\", \"forget\"")]
    [InlineData("[ { \"update\": \"ftrl\", \"step\": 0.1, \"beta\": 0 } ]", "learning.bank[0].beta: expected a number above 0, found the number 0")]
    [InlineData("[ { \"update\": \"ftrl\", \"step\": 0.1, \"l1\": -1 } ]", "learning.bank[0].l1: expected a number, 0 or more, found the number -1")]
    [InlineData("[ { \"update\": \"ftrl\", \"step\": 0.1, \"l2\": -1 } ]", "learning.bank[0].l2: expected a number, 0 or more, found the number -1")]
    [InlineData("[ { \"update\": \"newton\", \"forgetting\": 1.01 } ]", "learning.bank[0].forgetting: expected a number above 0, at most 1, found the number 1.01")]
    [InlineData("[ { \"update\": \"newton\", \"prior\": 0 } ]", "learning.bank[0].prior: expected a number above 0, at most 1000000, found the number 0")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"momentum\": 0.9 } ]", "learning.bank[0].momentum: unknown key. Known here: \"update\", \"step\", \"stepDecay\", \"weightDecay\", \"overshootProof\", \"forget\"")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1 }, { \"update\": \"sgd\", \"step\": [ 0.2, 0.1 ] } ]", "learning.bank[1]: the setting \"sgd step=0.1 stepDecay=0 weightDecay=0\" is already made by learning.bank[0]: settings must differ")]
    public void Bank_Wrong_IsRefused(string bank, string start, string end = "")
    {
        string error = Error(bank);

        Assert.StartsWith(start, error, StringComparison.Ordinal);
        Assert.EndsWith(end, error, StringComparison.Ordinal);
        if (!start.EndsWith("one of ", StringComparison.Ordinal)) Assert.Equal(start, error);
    }

    [Fact]
    public void Publish_NameOfASetting_IsPublished()
    {
        var learning = Definitions.ReadWith(
            """ "learning": { "publish": "sgd step=0.1 stepDecay=0 weightDecay=0", "bank": [ { "update": "sgd", "step": 0.1 } ] }""").Engine.Learning;

        Assert.Equal("sgd step=0.1 stepDecay=0 weightDecay=0", learning.PublishedSetting);
        Assert.Null(Definitions.ReadWith("\"learning\": { \"publish\": \"blend\" }").Engine.Learning.PublishedSetting);
    }

    [Fact]
    public void Publish_UnknownName_ListsTheNames()
    {
        var error = Definitions.ErrorWith(
            """ "learning": { "publish": "sgd step=0.2 stepDecay=0 weightDecay=0", "bank": [ { "update": "sgd", "step": 0.1 } ] }""");

        Assert.Equal(
            "expected one of \"blend\", \"sgd step=0.1 stepDecay=0 weightDecay=0\", found the string \"sgd step=0.2 stepDecay=0 weightDecay=0\";"
            + " did you mean \"sgd step=0.1 stepDecay=0 weightDecay=0\"?",
            error.Message);
    }

    [Fact]
    public void Publish_WhereTheBankIsWrong_IsNotBlamed() =>
        Assert.Equal("learning.bank[0].step", Definitions.ErrorWith("\"learning\": { \"publish\": \"x\", \"bank\": [ { \"update\": \"sgd\", \"step\": 0 } ] }").Path);

    private static string Steps(int count) =>
        $$"""[ { "update": "sgd", "step": [ {{string.Join(", ", Enumerable.Range(1, count).Select(i => $"0.{i:D3}"))}} ] } ]""";

    private static ImmutableArray<SettingOptions> Read(string bank) => Definitions.ReadWith($"\"learning\": {{ \"bank\": {bank} }}").Engine.Learning.Bank;

    private static string Error(string bank)
    {
        var error = Definitions.ErrorWith($"\"learning\": {{ \"bank\": {bank} }}");
        return $"{error.Path}: {error.Message}";
    }
}
