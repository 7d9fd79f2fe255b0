using System.Globalization;
using System.Text;
using CsCheck;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Tests.Formats;

public sealed class RoundedNumberTests
{
    private static string Write(double value)
    {
        byte[] room = new byte[RoundedNumber.MaximumLength];
        return Encoding.ASCII.GetString(room.AsSpan(0, RoundedNumber.Write(value, room)));
    }

    [Theory]
    [InlineData(0, "0")]
    [InlineData(0.83, "0.83")]
    [InlineData(-12.5, "-12.5")]
    [InlineData(-0.0000021, "-0.000002")]
    [InlineData(4e-7, "0")]
    [InlineData(-4e-7, "0")]
    [InlineData(0.9999999, "1")]
    [InlineData(100, "100")]
    [InlineData(1e9, "1000000000")]
    [InlineData(123456789.000001, "123456789.000001")]
    [InlineData(1e300, "1E+300")]
    [InlineData(-1.2345678901234567e+308, "-1.2345678901234567E+308")]
    public void Write_Number_HasSixDecimalsAtMost(double value, string text) => Assert.Equal(text, Write(value));

    [Fact]
    public void Write_AnyNumber_IsWithinHalfAMillionth() => Gen.Double[-1000, 1000].Sample(value =>
    {
        string text = Write(value);
        Assert.InRange(double.Parse(text, CultureInfo.InvariantCulture), value - 0.5000001e-6, value + 0.5000001e-6);
        Assert.False(text.Contains('.', StringComparison.Ordinal) && text.EndsWith('0'));
    }, seed: "0000000000000");
}
