namespace StreamLogit.Pipeline.Formats;

/// <summary>Times as RFC 3339 writes them, in UTC.</summary>
public static class TimestampText
{
    /// <summary>The most bytes that a time takes: <c>2026-03-01T08:15:30.120456Z</c>.</summary>
    public const int MaximumLength = 27;

    /// <summary>Writes a time with as many decimals of the second as it needs: none, three or six.</summary>
    /// <param name="microseconds">Microseconds since 1970-01-01T00:00:00Z, within the years 1 to 9999.</param>
    /// <param name="room">At least <see cref="MaximumLength"/> bytes.</param>
    /// <returns>How many bytes were written.</returns>
    /// <exception cref="ArgumentOutOfRangeException">The time lies beyond those years.</exception>
    public static int Write(long microseconds, Span<byte> room)
    {
        var time = DateTime.UnixEpoch.AddTicks(checked(microseconds * TimeSpan.TicksPerMicrosecond));
        time.GetDate(out int year, out int month, out int day);
        TwoDigits(year / 100, room);
        TwoDigits(year % 100, room[2..]);
        room[4] = (byte)'-';
        TwoDigits(month, room[5..]);
        room[7] = (byte)'-';
        TwoDigits(day, room[8..]);
        room[10] = (byte)'T';
        TwoDigits(time.Hour, room[11..]);
        room[13] = (byte)':';
        TwoDigits(time.Minute, room[14..]);
        room[16] = (byte)':';
        TwoDigits(time.Second, room[17..]);
        int written = 19;
        int fraction = time.Millisecond * 1000 + time.Microsecond;
        if (fraction != 0)
        {
            room[written++] = (byte)'.';
            written += ThreeDigits(fraction / 1000, room[written..]);
            if (fraction % 1000 != 0) written += ThreeDigits(fraction % 1000, room[written..]);
        }
        room[written++] = (byte)'Z';
        return written;
    }

    private static void GetDate(this DateTime time, out int year, out int month, out int day) =>
        DateOnly.FromDateTime(time).Deconstruct(out year, out month, out day);

    private static void TwoDigits(int value, Span<byte> room)
    {
        room[0] = (byte)('0' + value / 10);
        room[1] = (byte)('0' + value % 10);
    }

    private static int ThreeDigits(int value, Span<byte> room)
    {
        room[0] = (byte)('0' + value / 100);
        TwoDigits(value % 100, room[1..]);
        return 3;
    }
}
