using StreamLogit.Engine.Learning;
using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class WarmStartFileTests : IDisposable
{
    private static readonly FittedModel Model = new()
    {
        SlotMeaning = "number \"x\" & more",
        Intercept = -0.1 - 0.2,
        Coefficients = [new FittedCoefficient(16, "x", 1.0 / 3), new FittedCoefficient(3, "c=ö\"\n", 5e-324), new FittedCoefficient(4, "d", -1.7976931348623157e308)],
        Scales = [new FittedScale(0, [0, 255, 7])],
    };

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Read_WhatWasWritten_GivesTheSameBits()
    {
        WarmStartFile.Write(_folder["fit.json"], Model);
        WarmStartFile.Write(_folder["fit.json"], Model); // over the first
        var read = WarmStartFile.Read(_folder["fit.json"]);
        Assert.Equal(Model.SlotMeaning, read.SlotMeaning);
        Assert.Equal(Model.Intercept, read.Intercept);
        Assert.Equal(Model.Coefficients, read.Coefficients);
        Assert.Equal(Model.Scales[0].Learned, read.Scales[0].Learned);
        Assert.Equal(["fit.json"], Directory.EnumerateFiles(_folder.Path).Select(Path.GetFileName));
    }

    [Theory]
    [InlineData("", "it is damaged")]
    [InlineData("[]", "it was not written by streamlogit fit")]
    [InlineData("{}", "it was not written by streamlogit fit")]
    [InlineData("""{"kind":"streamlogit coefficients 2"}""", "it was not written by streamlogit fit")]
    [InlineData("""{"kind":"streamlogit coefficients 1"}""", "it is damaged")]
    [InlineData("""{"kind":"streamlogit coefficients 1","slotMeaning":null,"intercept":0,"coefficients":[],"scales":[]}""", "it is damaged")]
    [InlineData("""{"kind":"streamlogit coefficients 1","slotMeaning":"","intercept":1e999,"coefficients":[],"scales":[]}""", "it is damaged")]
    [InlineData("""{"kind":"streamlogit coefficients 1","slotMeaning":"","intercept":0,"coefficients":[1],"scales":[]}""", "it is damaged")]
    [InlineData("""{"kind":"streamlogit coefficients 1","slotMeaning":"","intercept":0,"coefficients":[{"slot":1.5,"feature":"","value":0}],"scales":[]}""", "it is damaged")]
    [InlineData("""{"kind":"streamlogit coefficients 1","slotMeaning":"","intercept":0,"coefficients":[],"scales":[{"feature":0,"learned":"?"}]}""", "it is damaged")]
    public void Definition_UnusableFile_IsAnErrorAtItsKey(string text, string message)
    {
        _folder.Write("fit.json", text);
        var error = Assert.Single(Assert.Throws<DefinitionException>(() => Read(DefinitionUse.Replay)).Errors);
        Assert.Equal("learning.warmStart", error.Path);
        Assert.StartsWith("the file cannot be used: " + message, error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Definition_NoFile_IsAnErrorUnlessItIsToBeMade()
    {
        var error = Assert.Single(Assert.Throws<DefinitionException>(() => Read(DefinitionUse.Replay)).Errors);
        Assert.Equal("there is no such file: streamlogit fit makes it", error.Message);
        var toFit = Read(DefinitionUse.Fit);
        Assert.Equal(_folder["fit.json"], toFit.WarmStartPath);
        Assert.Null(toFit.Engine.Learning.WarmStart);
        WarmStartFile.Write(_folder["fit.json"], Model);
        Assert.Equal(Model.Intercept, Read(DefinitionUse.Replay).Engine.Learning.WarmStart!.Intercept);
    }

    private StreamDefinition Read(DefinitionUse use) => StreamDefinitionReader.ReadFile(
        _folder.Write("quay.json", Definitions.With("\"learning\": { \"warmStart\": \"fit.json\" }")), use: use);
}
