using System.Globalization;
using System.Text;
using CsCheck;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Tests.Formats;

public sealed class TimestampTextTests
{
    private static string Write(long microseconds)
    {
        byte[] room = new byte[TimestampText.MaximumLength];
        return Encoding.ASCII.GetString(room.AsSpan(0, TimestampText.Write(microseconds, room)));
    }

    [Theory]
    [InlineData(0, "1970-01-01T00:00:00Z")]
    [InlineData(-1, "1969-12-31T23:59:59.999999Z")]
    [InlineData(1_772_352_930_120_000, "2026-03-01T08:15:30.120Z")]
    [InlineData(1_772_352_930_120_456, "2026-03-01T08:15:30.120456Z")]
    [InlineData(1_772_352_930_000_007, "2026-03-01T08:15:30.000007Z")]
    [InlineData(1_709_164_800_000_000, "2024-02-29T00:00:00Z")]
    [InlineData(-62_135_596_800_000_000, "0001-01-01T00:00:00Z")]
    [InlineData(253_402_300_799_999_999, "9999-12-31T23:59:59.999999Z")]
    public void Write_Time_HasTheDecimalsItNeeds(long microseconds, string text) => Assert.Equal(text, Write(microseconds));

    [Fact]
    public void Write_AnyTime_ReadsBackTheSame() =>
        Gen.Long[-62_135_596_800_000_000, 253_402_300_799_999_999].Sample(microseconds =>
        {
            var read = DateTimeOffset.Parse(Write(microseconds), CultureInfo.InvariantCulture, DateTimeStyles.RoundtripKind);
            Assert.Equal(microseconds, (read - DateTimeOffset.UnixEpoch).Ticks / TimeSpan.TicksPerMicrosecond);
        }, seed: "0000000000000");

    [Fact]
    public void Write_YearTenThousand_Throws() =>
        Assert.Throws<ArgumentOutOfRangeException>(() => Write(253_402_300_800_000_000));
}
