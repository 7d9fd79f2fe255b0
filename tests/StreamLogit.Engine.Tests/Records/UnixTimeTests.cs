using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

public class UnixTimeTests
{
    [Theory]
    [InlineData("0", 0)]
    [InlineData("-0", 0)]
    [InlineData("0.000", 0)]
    [InlineData("0e999999999999999", 0)]
    [InlineData("1", 1_000_000)]
    [InlineData("-1", -1_000_000)]
    [InlineData("1772352930", 1_772_352_930_000_000)]
    [InlineData("1772352930.12", 1_772_352_930_120_000)]
    [InlineData("1772352930.1234567", 1_772_352_930_123_456)]
    [InlineData("1772352930.9999999999999999999999", 1_772_352_930_999_999)]
    [InlineData("1.772352930e9", 1_772_352_930_000_000)]
    [InlineData("1772352930123e-3", 1_772_352_930_123_000)]
    [InlineData("177235293012e-2", 1_772_352_930_120_000)]
    [InlineData("0.0000001e7", 1_000_000)]
    [InlineData("0.000001", 1)]
    [InlineData("0.0000019", 1)]
    [InlineData("0.0000009", 0)]
    [InlineData("-0.0000009", -1)]
    [InlineData("-0.000001", -1)]
    [InlineData("-1.0000001", -1_000_001)]
    [InlineData("1e-999999999999999999999", 0)]
    [InlineData("-1e-999999999999999999999", -1)]
    [InlineData("-62135596800", TimeRange.First)]
    [InlineData("253402300799.999999", TimeRange.Last)]
    [InlineData("253402300799.9999999", TimeRange.Last)]
    public void Read_Seconds_GivesMicroseconds(string text, long expected)
    {
        Assert.Equal(TimeFault.None, UnixTime.Read(Encoding.UTF8.GetBytes(text), 6, out long microseconds));
        Assert.Equal(expected, microseconds);
    }

    [Theory]
    [InlineData("1772352930123", 1_772_352_930_123_000)]
    [InlineData("1772352930123.456789", 1_772_352_930_123_456)]
    [InlineData("-0.5", -500)]
    [InlineData("1.5E3", 1_500_000)]
    public void Read_Milliseconds_GivesMicroseconds(string text, long expected)
    {
        Assert.Equal(TimeFault.None, UnixTime.Read(Encoding.UTF8.GetBytes(text), 3, out long microseconds));
        Assert.Equal(expected, microseconds);
    }

    [Theory]
    [InlineData("", TimeFault.Form)]
    [InlineData("-", TimeFault.Form)]
    [InlineData("+1", TimeFault.Form)]
    [InlineData("01", TimeFault.Form)]
    [InlineData("1.", TimeFault.Form)]
    [InlineData(".5", TimeFault.Form)]
    [InlineData("1e", TimeFault.Form)]
    [InlineData("1e+", TimeFault.Form)]
    [InlineData(" 1", TimeFault.Form)]
    [InlineData("1 ", TimeFault.Form)]
    [InlineData("1_000", TimeFault.Form)]
    [InlineData("NaN", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30Z", TimeFault.Form)]
    [InlineData("-62135596800.0000001", TimeFault.Range)]
    [InlineData("-62135596801", TimeFault.Range)]
    [InlineData("253402300800", TimeFault.Range)]
    [InlineData("1772352930123456789", TimeFault.Range)]
    [InlineData("1e300", TimeFault.Range)]
    [InlineData("-1e99999999999999999999999", TimeFault.Range)]
    internal void Read_UnusableSeconds_TellsTheFault(string text, TimeFault expected) =>
        Assert.Equal(expected, UnixTime.Read(Encoding.UTF8.GetBytes(text), 6, out _));
}
