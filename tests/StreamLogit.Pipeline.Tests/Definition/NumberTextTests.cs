using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class NumberTextTests
{
    [Theory]
    [InlineData("0", "0")]
    [InlineData("-0.00e9", "0")]
    [InlineData("100.0", "100")]
    [InlineData("1e5", "100000")]
    [InlineData("1.25E+2", "125")]
    [InlineData("12500e-2", "125")]
    [InlineData("-7", "-7")]
    [InlineData("18446744073709551615", "18446744073709551615")]
    public void TryWhole_WholeNumber_IsExact(string text, string expected)
    {
        Assert.True(NumberText.TryWhole(text, out decimal number));
        Assert.Equal(expected, number.ToString(System.Globalization.CultureInfo.InvariantCulture));
    }

    [Theory]
    [InlineData("0.5")]
    [InlineData("1e-30")]
    [InlineData("16.00000000000000000000000000000000001")]
    [InlineData("1e99")]
    [InlineData("1e99999999999999")]
    [InlineData("1e-99999999999999")]
    [InlineData("1.5e-2147483648")]
    [InlineData("123456789012345678901")]
    public void TryWhole_FractionOrTooLong_IsNone(string text) => Assert.False(NumberText.TryWhole(text, out _));

    [Theory]
    [InlineData("0", true)]
    [InlineData("-1.5e-3", true)]
    [InlineData("1.", false)]
    [InlineData("01", false)]
    [InlineData("+1", false)]
    [InlineData("1\n", false)]
    [InlineData("NaN", false)]
    public void IsNumber_Text_FollowsJson(string text, bool expected) => Assert.Equal(expected, NumberText.IsNumber(text));
}
