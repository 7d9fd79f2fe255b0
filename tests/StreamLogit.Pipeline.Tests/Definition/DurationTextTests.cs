using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class DurationTextTests
{
    [Theory]
    [InlineData("250ms", 250_000)]
    [InlineData("0.001ms", 1)]
    [InlineData("10s", 10_000_000)]
    [InlineData("90m", 5_400_000_000)]
    [InlineData("1.5h", 5_400_000_000)]
    [InlineData("30d", 2_592_000_000_000)]
    [InlineData("2w", 1_209_600_000_000)]
    [InlineData("0s", 0)]
    [InlineData("007d", 604_800_000_000)]
    [InlineData("36525d", 3_155_760_000_000_000)]
    public void TryParse_Duration_IsItsMicroseconds(string text, long expected)
    {
        Assert.True(DurationText.TryParse(text, out long microseconds));
        Assert.Equal(expected, microseconds);
    }

    [Theory]
    [InlineData("")]
    [InlineData("5")]
    [InlineData("d")]
    [InlineData("5 d")]
    [InlineData(" 5d")]
    [InlineData("5d ")]
    [InlineData("-5d")]
    [InlineData("+5d")]
    [InlineData("5D")]
    [InlineData("5y")]
    [InlineData(".5d")]
    [InlineData("5.d")]
    [InlineData("1,5h")]
    [InlineData("1_000s")]
    [InlineData("1e3s")]
    [InlineData("1h30m")]
    [InlineData("٣d")]
    [InlineData("0.0001ms")]
    [InlineData("36526d")]
    [InlineData("99999999999999999999d")]
    [InlineData("1.00000000000000000000000000000000000001s")]
    public void TryParse_AnythingElse_IsNone(string text) => Assert.False(DurationText.TryParse(text, out _));

    [Theory]
    [InlineData(0, "0ms")]
    [InlineData(1, "0.001ms")]
    [InlineData(90_000_000, "90s")]
    [InlineData(5_400_000_000, "90m")]
    [InlineData(604_800_000_000, "1w")]
    public void Format_Microseconds_TakesTheLargestWholeUnit(long microseconds, string expected)
    {
        Assert.Equal(expected, DurationText.Format(microseconds));
        Assert.True(DurationText.TryParse(expected, out long parsed));
        Assert.Equal(microseconds, parsed);
    }
}
