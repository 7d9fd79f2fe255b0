using System.Collections.Immutable;
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
    public void Bank_Default_IsTheDefaultBank() => Assert.Equal(DefaultBank.Settings, Read("\"default\""));

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
    [InlineData("[ { \"update\": \"sgd\" } ]", "learning.bank[0]: the key \"step\" is missing: a number above 0, or a list of them")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": [] } ]", "learning.bank[0].step: expected a list of values, at least one, found a list")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0 } ]", "learning.bank[0].step: expected a number above 0, found the number 0")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 1e309 } ]", "learning.bank[0].step: expected a number above 0 that a double can hold, at most 1.7976931348623157E+308, found the number 1e309")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": [ 0.1, \"0.2\" ] } ]", "learning.bank[0].step[1]: expected a number above 0, found the string \"0.2\"")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": [ 0.1, 1e-1 ] } ]", "learning.bank[0].step[1]: the number 1e-1 is there twice: keep one")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"stepDecay\": 1.1 } ]", "learning.bank[0].stepDecay: expected a number from 0 to 1, found the number 1.1")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"weightDecay\": -1e-6 } ]", "learning.bank[0].weightDecay: expected a number, 0 or more, found the number -1e-6")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"weightDecay\": [ 0, -0 ] } ]", "learning.bank[0].weightDecay[1]: the number -0 is there twice: keep one")]
    [InlineData("[ { \"update\": \"sgd\", \"step\": 0.1, \"momentum\": 0.9 } ]", "learning.bank[0].momentum: unknown key. Known here: \"update\", \"step\", \"stepDecay\", \"weightDecay\"")]
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
