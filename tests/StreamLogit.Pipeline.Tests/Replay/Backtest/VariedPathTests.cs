using StreamLogit.Pipeline.Replay.Backtest;

namespace StreamLogit.Pipeline.Tests.Replay.Backtest;

public sealed class VariedPathTests
{
    [Theory]
    [InlineData("learning.switchRate=0,1e-3", "learning.switchRate", new[] { "0", "1e-3" })]
    [InlineData("a=1", "a", new[] { "1" })]
    [InlineData("learning.bank[0].step=[0.1,0.2],[0.3]", "learning.bank[0].step", new[] { "[0.1,0.2]", "[0.3]" })]
    [InlineData("""features[0]={"category":["a","b"]},{"number":"c,d"}""", "features[0]", new[] { """{"category":["a","b"]}""", """{"number":"c,d"}""" })]
    [InlineData("""record.labelValues["a=b,c"]=0, 1""", """record.labelValues["a=b,c"]""", new[] { "0", "1" })]
    [InlineData("""a="x\",y",z""", "a", new[] { """
        "x\",y"
        """, "z" })]
    public void Parse_PathAndValues_SplitsAtCommasBetweenValues(string text, string path, string[] values)
    {
        var varied = VariedPath.Parse(text);

        Assert.Equal(path, varied.Path);
        Assert.Equal(values, varied.Values);
    }

    [Theory]
    [InlineData("learning.slots")]
    [InlineData("learning.slots=")]
    [InlineData("=1,2")]
    [InlineData("a=1,,2")]
    [InlineData("a=1,2,1")]
    public void Parse_Wrong_Throws(string text) => Assert.Throws<FormatException>(() => VariedPath.Parse(text));

    [Fact]
    public void Product_TwoPaths_IsEveryPairWithTheLastFastest() => Assert.Equal(
        ["a=1 b=x", "a=1 b=y", "a=2 b=x", "a=2 b=y"],
        VariedPath.Product([VariedPath.Parse("a=1,2"), VariedPath.Parse("b=x,y")]).Select(overrides => string.Join(' ', overrides)));

    [Fact]
    public void Product_NoPaths_IsEmpty() => Assert.Empty(VariedPath.Product([]));
}
