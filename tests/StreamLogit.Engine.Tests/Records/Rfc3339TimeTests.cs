using System.Globalization;
using System.Text;
using CsCheck;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

public class Rfc3339TimeTests
{
    [Fact]
    public void Read_RandomTimes_AgreesWithDateTimeOffset()
    {
        var reader = new Rfc3339Time();
        var gen = Gen.Select(Gen.Long[0, DateTime.MaxValue.Ticks], Gen.Int[0, 7], Gen.Int[-14 * 60, 14 * 60], Gen.Bool);
        gen.Check(30_000, 21, sample =>
        {
            var (ticks, digits, offset, isZulu) = sample;
            string format = "yyyy-MM-dd'T'HH:mm:ss" + (digits == 0 ? "" : "." + new string('f', digits)) + (isZulu ? "'Z'" : "zzz");
            var utc = new DateTimeOffset(ticks, TimeSpan.Zero);
            if (!isZulu && (ticks + offset * TimeSpan.TicksPerMinute is < 0 || ticks + offset * TimeSpan.TicksPerMinute > DateTime.MaxValue.Ticks)) return;
            string text = (isZulu ? utc : utc.ToOffset(TimeSpan.FromMinutes(offset))).ToString(format, CultureInfo.InvariantCulture);
            var parsed = DateTimeOffset.ParseExact(text, format, CultureInfo.InvariantCulture, DateTimeStyles.AssumeUniversal);
            // The seventh digit is cut off towards the past.
            long expected = (long)Math.Floor((parsed.UtcTicks - DateTime.UnixEpoch.Ticks) / (decimal)TimeSpan.TicksPerMicrosecond);
            Assert.Equal(TimeFault.None, reader.Read(Encoding.UTF8.GetBytes(text), out long microseconds));
            Assert.Equal(expected, microseconds);
        });
    }

    [Fact]
    public void Read_EveryDayOfTheCalendar_IsCountedOn()
    {
        var reader = new Rfc3339Time();
        byte[] text = [.. "yyyy-MM-ddT00:00:00Z"u8];
        long expected = TimeRange.First;
        for (int day = 0; day <= DateOnly.MaxValue.DayNumber; day++)
        {
            DateOnly.FromDayNumber(day).TryFormat(text, out _, "yyyy-MM-dd", CultureInfo.InvariantCulture);
            var fault = reader.Read(text, out long microseconds);
            if (fault != TimeFault.None || microseconds != expected) Assert.Fail(Encoding.UTF8.GetString(text));
            expected += 86_400_000_000;
        }
        Assert.Equal(TimeRange.Last + 1, expected);
    }

    /// <summary>The examples of RFC 3339, section 5.8.</summary>
    [Theory]
    [InlineData("1985-04-12T23:20:50.52Z", 482_196_050_520_000)]
    [InlineData("1996-12-19T16:39:57-08:00", 851_042_397_000_000)]
    [InlineData("1990-12-31T23:59:60Z", 662_688_000_000_000)]
    [InlineData("1990-12-31T15:59:60-08:00", 662_688_000_000_000)]
    [InlineData("1937-01-01T12:00:27.87+00:20", -1_041_337_172_130_000)]
    public void Read_ExamplesOfTheStandard_GivesTheirTimes(string text, long expected)
    {
        Assert.Equal(TimeFault.None, Read(text, out long microseconds));
        Assert.Equal(expected, microseconds);
    }

    [Theory]
    [InlineData("1970-01-01t00:00:00z", 0)]
    [InlineData("1970-01-01T00:00:00-00:00", 0)]
    [InlineData("1970-01-01T00:00:00.9999999999999999999999999Z", 999_999)]
    [InlineData("1969-12-31T23:59:59.0000019Z", -999_999)]
    [InlineData("1970-01-01T23:59:00+23:59", 0)]
    [InlineData("0001-01-01T00:00:00Z", TimeRange.First)]
    [InlineData("0001-01-01T23:59:00+23:59", TimeRange.First)]
    [InlineData("9999-12-31T23:59:59.999999Z", TimeRange.Last)]
    [InlineData("2000-02-29T00:00:00Z", 951_782_400_000_000)]
    [InlineData("2016-12-31T23:59:60.75Z", 1_483_228_800_000_000)]
    [InlineData("2015-07-01T01:59:60+02:00", 1_435_708_800_000_000)]
    [InlineData("2015-06-30T23:59:59.999999Z", 1_435_708_799_999_999)]
    public void Read_UnusualTimes_AreAccepted(string text, long expected)
    {
        Assert.Equal(TimeFault.None, Read(text, out long microseconds));
        Assert.Equal(expected, microseconds);
    }

    [Theory]
    [InlineData("", TimeFault.Form)]
    [InlineData("2026", TimeFault.Form)]
    [InlineData("2026-03-01", TimeFault.Form)]
    [InlineData("2026-03-01T08:15Z", TimeFault.Form)]
    [InlineData("2026-03-01 08:15:30Z", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30", TimeFault.NoOffset)]
    [InlineData("2026-03-01T08:15:30.5", TimeFault.NoOffset)]
    [InlineData("2026-03-01T08:15:30.Z", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30,5Z", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30ZZ", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30Z ", TimeFault.Form)]
    [InlineData(" 2026-03-01T08:15:30Z", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30+02", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30+0200", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30+2:00", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30+02:0a", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30+02:00Z", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30~02:00", TimeFault.Form)]
    [InlineData("2026/03/01T08:15:30Z", TimeFault.Form)]
    [InlineData("2026-3-01T08:15:30ZZ", TimeFault.Form)]
    [InlineData("+026-03-01T08:15:30Z", TimeFault.Form)]
    [InlineData("12026-03-01T08:15:30Z", TimeFault.Form)]
    [InlineData("20x6-03-01T08:15:30Z", TimeFault.Form)]
    [InlineData("2026-03-01T08.15.30Z", TimeFault.Form)]
    [InlineData("2026-03-01T08:15.30ZZ", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:3xZ", TimeFault.Form)]
    [InlineData("2026-03-01T08:15:30.1e5Z", TimeFault.Form)]
    [InlineData("2026-00-01T08:15:30Z", TimeFault.Calendar)]
    [InlineData("2026-13-01T08:15:30Z", TimeFault.Calendar)]
    [InlineData("2026-03-00T08:15:30Z", TimeFault.Calendar)]
    [InlineData("2026-03-32T08:15:30Z", TimeFault.Calendar)]
    [InlineData("2026-04-31T08:15:30Z", TimeFault.Calendar)]
    [InlineData("2026-02-29T08:15:30Z", TimeFault.Calendar)]
    [InlineData("1900-02-29T08:15:30Z", TimeFault.Calendar)]
    [InlineData("2026-03-01T24:00:00Z", TimeFault.Calendar)]
    [InlineData("2026-03-01T08:60:30Z", TimeFault.Calendar)]
    [InlineData("2026-03-01T08:15:61Z", TimeFault.Calendar)]
    [InlineData("2026-03-01T08:15:99Z", TimeFault.Calendar)]
    [InlineData("2026-03-01T08:15:30+24:00", TimeFault.Calendar)]
    [InlineData("2026-03-01T08:15:30-02:60", TimeFault.Calendar)]
    [InlineData("2026-03-01T08:15:60Z", TimeFault.Calendar)]
    [InlineData("2016-12-31T23:59:60+01:00", TimeFault.Calendar)]
    [InlineData("2016-12-30T23:59:60Z", TimeFault.Calendar)]
    [InlineData("2016-12-31T22:59:60Z", TimeFault.Calendar)]
    [InlineData("0000-01-01T00:00:00Z", TimeFault.Range)]
    [InlineData("0000-12-31T23:59:59-01:00", TimeFault.Range)]
    [InlineData("0001-01-01T00:00:00+00:01", TimeFault.Range)]
    [InlineData("9999-12-31T23:59:59-00:01", TimeFault.Range)]
    [InlineData("9999-12-31T23:59:60Z", TimeFault.Range)]
    internal void Read_UnusableTimes_TellsTheFault(string text, TimeFault expected)
    {
        Assert.Equal(expected, Read(text, out _));
        // The same after a time in the same minute, which is remembered.
        var reader = new Rfc3339Time();
        reader.Read("2026-03-01T08:15:30Z"u8, out _);
        Assert.Equal(expected, reader.Read(Encoding.UTF8.GetBytes(text), out _));
    }

    [Fact]
    public void Read_SixteenNulsForTheMinute_IsNoTime() => Assert.Equal(TimeFault.Form, Read(new string('\0', 16) + ":00Z", out _));

    [Fact]
    public void Read_SameMinuteAgain_ReadsSecondsAndOffsetAnew()
    {
        var reader = new Rfc3339Time();
        Assert.Equal(TimeFault.None, reader.Read("2016-12-31T23:59:60Z"u8, out long first));
        Assert.Equal(TimeFault.None, reader.Read("2016-12-31T23:59:01.5Z"u8, out long second));
        Assert.Equal(TimeFault.None, reader.Read("2016-12-31T23:59:01.5+01:00"u8, out long third));
        Assert.Equal(1_483_228_800_000_000, first);
        Assert.Equal(first - 58_500_000, second);
        Assert.Equal(second - 3_600_000_000, third);
    }

    private static TimeFault Read(string text, out long microseconds) => new Rfc3339Time().Read(Encoding.UTF8.GetBytes(text), out microseconds);
}
