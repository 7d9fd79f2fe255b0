using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class NearestNameTests
{
    [Theory]
    [InlineData("", "", 0)]
    [InlineData("abc", "", 3)]
    [InlineData("kitten", "sitting", 3)]
    [InlineData("scael", "scale", 1)]
    [InlineData("ca", "abc", 3)]
    public void Distance_TwoTexts_CountsEdits(string left, string right, int expected) => Assert.Equal(expected, NearestName.Distance(left, right));

    [Theory]
    [InlineData("lables", "; did you mean \"labels\"?")]
    [InlineData("LABELS", "; did you mean \"labels\"?")]
    [InlineData("maxbyte", "; did you mean \"maxBytes\"?")]
    [InlineData("kafka", "")]
    [InlineData("", "")]
    public void Hint_Written_NamesTheNearest(string written, string expected) => Assert.Equal(expected, NearestName.Hint(written, ["labels", "maxBytes"]));
}
