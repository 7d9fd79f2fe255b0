using System.Text;
using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>Text that is not JSON, and where it stops being JSON.</summary>
public sealed class SyntaxTests
{
    [Theory]
    [InlineData("", 1, 1)]
    [InlineData("   \n ", 2, 2)]
    [InlineData("// only a comment", 1, 18)]
    [InlineData("{ \"stream\": \"q\" ", 1, 17)]
    [InlineData("{\n  \"stream\" \"q\"\n}", 2, 12)]
    [InlineData("{\n  \"stream\": q\n}", 2, 13)]
    [InlineData("{\n  'stream': 1\n}", 2, 3)]
    [InlineData("{\n\n  \"a\": 1,,\n}", 3, 10)]
    [InlineData("{ \"a\": 01 }", 1, 9)]
    [InlineData("{ \"a\": NaN }", 1, 8)]
    [InlineData("{ \"ärger\": ] }", 1, 12)]
    [InlineData("{ \"a\": \"unended }", 1, 18)]
    [InlineData("{} {}", 1, 4)]
    [InlineData("{}\n/* unended", 2, 1)]
    public void Read_NotJson_SaysWhere(string json, int line, int column)
    {
        var error = Assert.Single(Definitions.Errors(json));

        Assert.Equal(new DefinitionPlace("quay.json", line, column), error.Place);
        Assert.StartsWith("not JSON: ", error.Message, StringComparison.Ordinal);
        Assert.DoesNotContain("LineNumber", error.Message, StringComparison.Ordinal);
        Assert.DoesNotContain('\n', error.ToString());
    }

    [Fact]
    public void Read_NotJsonThatTheMessageQuotes_IsOneShortLine()
    {
        var error = Assert.Single(Definitions.Errors("{ \"a\": tru" + string.Concat(Enumerable.Repeat("\n", 1000))));

        Assert.DoesNotContain(error.Message, char.IsControl);
        Assert.InRange(error.Message.Length, 1, 200);
    }

    [Theory]
    [InlineData("[]", "a list")]
    [InlineData("\"x\"", "the string \"x\"")]
    [InlineData("12", "the number 12")]
    [InlineData("null", "null")]
    public void Read_NotAnObject_IsRefused(string json, string found) =>
        Assert.Equal($"quay.json:1:1: expected an object, found {found}", Assert.Single(Definitions.Errors(json)).ToString());

    [Fact]
    public void Read_NestedTooDeep_IsRefused()
    {
        var error = Assert.Single(Definitions.Errors(new string('[', 10_000)));

        Assert.Equal(new DefinitionPlace("quay.json", 1, 65), error.Place);
    }

    [Fact]
    public void Read_HalfASurrogatePair_IsRefusedAtItsString()
    {
        var error = Assert.Single(Definitions.Errors("{\n \"stream\": \"\\ud800\" }"));

        Assert.Equal("quay.json:2:12: not JSON: a \\u escape in this string is half of a surrogate pair", error.ToString());
        Assert.Equal(2, Assert.Single(Definitions.Errors("{\n \"\\udc00\": 1 }")).Place.Column);
    }

    [Fact]
    public void Read_NotUtf8_IsRefusedAtTheByte()
    {
        byte[] latin1 = Encoding.Latin1.GetBytes("{\n \"stream\": \"kä\" }");

        var error = Assert.Single(Assert.Throws<DefinitionException>(() => StreamDefinitionReader.Read(latin1, "quay.json", "/")).Errors);

        Assert.Equal("quay.json:2:14: this byte is not UTF-8: save the file in the encoding UTF-8", error.ToString());
    }

    [Fact]
    public void Read_ByteOrderMark_IsPassedOver()
    {
        byte[] marked = [0xEF, 0xBB, 0xBF, .. Encoding.UTF8.GetBytes(Definitions.Smallest)];

        Assert.Equal("quay", StreamDefinitionReader.Read(marked, "quay.json", "/").Engine.Stream);
    }

    [Fact]
    public void Read_CharactersBeforeAnError_CountAsEditorsCountThem()
    {
        // An umlaut has two bytes and one column; an emoji has four bytes and two columns.
        var error = Assert.Single(Definitions.Errors("""{ "stream": "ä😀", "features": [ { "number": "a" } ], "x": 1 }"""));

        Assert.Equal(55, error.Place.Column);
    }

    [Fact]
    public void Read_SyntaxErrorAndWrongOverride_AreReportedTogether() =>
        Assert.Equal(2, Definitions.Errors("{", ["nothing"]).Length);
}
