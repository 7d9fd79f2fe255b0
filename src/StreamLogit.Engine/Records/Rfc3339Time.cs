using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Records;

/// <summary>Reads a date-time of RFC 3339 (section 5.6), which always has an offset, to the microsecond.</summary>
/// <remarks>
/// Digits beyond the sixth of the fraction are cut off. A leap second (section 5.7: second 60 as the last one of a month in UTC) is taken
/// as the moment at which the next minute starts, whatever its fraction, since the count of microseconds has no room for it.
/// <c>T</c> and <c>Z</c> may be lower case; no blank may stand for <c>T</c>.
/// </remarks>
internal sealed class Rfc3339Time
{
    private const int MinuteLength = 16;
    private const int SecondLength = 19;
    private const long MicrosecondsPerMinute = 60_000_000;
    private const long MinutesPerDay = 1440;

    /// <summary>The last minute read, as it was written, and its minutes since 1970: the next time is mostly in the same. At first no UTF-8.</summary>
    private UInt128 _minuteText = UInt128.MaxValue;
    private long _minutes;

    private static ReadOnlySpan<byte> DaysOfMonth => [31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];

    /// <summary>Reads a time.</summary>
    /// <param name="text">All of it, without blanks around it.</param>
    /// <param name="microseconds">Microseconds since 1970-01-01T00:00:00Z.</param>
    public TimeFault Read(ReadOnlySpan<byte> text, out long microseconds)
    {
        microseconds = 0;
        if (text.Length < SecondLength || text[16] != ':') return TimeFault.Form;
        int second = TwoDigits(text, 17);
        if (second < 0) return TimeFault.Form;
        var minuteText = MemoryMarshal.Read<UInt128>(text);
        var minuteFault = TimeFault.None;
        long minutes = _minutes;
        if (minuteText != _minuteText)
        {
            minuteFault = ReadMinute(text, out minutes);
            if (minuteFault == TimeFault.Form) return TimeFault.Form;
        }

        int at = SecondLength;
        int fraction = 0;
        if (at < text.Length && text[at] == '.')
        {
            at++;
            if (!TryFraction(text, ref at, out fraction)) return TimeFault.Form;
        }
        if (at == text.Length) return TimeFault.NoOffset;
        int offsetMinutes = 0;
        if (text.Length != at + 1 || (text[at] | 0x20) != 'z')
        {
            var offsetFault = ReadOffset(text[at..], out offsetMinutes);
            if (offsetFault != TimeFault.None) return offsetFault;
        }
        if (minuteFault != TimeFault.None || second > 60) return minuteFault == TimeFault.None ? TimeFault.Calendar : minuteFault;
        _minuteText = minuteText;
        _minutes = minutes;

        minutes -= offsetMinutes;
        if (second == 60)
        {
            // The next minute must be the first of a month in UTC. 1440 divides it evenly only at midnight.
            if ((minutes + 1) % MinutesPerDay != 0 || !IsFirstOfMonth((minutes + 1) / MinutesPerDay)) return TimeFault.Calendar;
            fraction = 0;
        }
        microseconds = minutes * MicrosecondsPerMinute + second * 1_000_000L + fraction;
        return TimeRange.Contains(microseconds) ? TimeFault.None : TimeFault.Range;
    }

    /// <summary>Reads all before the seconds.</summary>
    private static TimeFault ReadMinute(ReadOnlySpan<byte> text, out long minutes)
    {
        minutes = 0;
        if (text[4] != '-' || text[7] != '-' || (text[10] | 0x20) != 't' || text[13] != ':') return TimeFault.Form;
        int century = TwoDigits(text, 0), yearOfCentury = TwoDigits(text, 2), month = TwoDigits(text, 5), day = TwoDigits(text, 8);
        int hour = TwoDigits(text, 11), minute = TwoDigits(text, 14);
        if ((century | yearOfCentury | month | day | hour | minute) < 0) return TimeFault.Form;
        int year = century * 100 + yearOfCentury;
        if ((uint)(month - 1) > 11 || day < 1 || day > DaysIn(year, month) || hour > 23 || minute > 59) return TimeFault.Calendar;
        minutes = DaysSince1970(year, month, day) * MinutesPerDay + hour * 60 + minute;
        return year == 0 ? TimeFault.Range : TimeFault.None;
    }

    /// <summary>Days from 1970-01-01 to a day of the proleptic Gregorian calendar.</summary>
    /// <remarks>Years are taken to begin in March, so that the leap day is their last and the lengths of months follow (153 m + 2) / 5.</remarks>
    private static long DaysSince1970(int year, int month, int day)
    {
        const int Days400Years = 146_097;
        const int DaysTo1970 = 719_468 + Days400Years;
        // 400 more years, which end where they began, keep the year before 0001-03-01 from being negative.
        int marchYear = year + 400 - (month <= 2 ? 1 : 0);
        int marchMonth = month > 2 ? month - 3 : month + 9;
        return marchYear * 365L + marchYear / 4 - marchYear / 100 + marchYear / 400 + (153 * marchMonth + 2) / 5 + day - 1 - DaysTo1970;
    }

    private static bool IsFirstOfMonth(long daysSince1970)
    {
        // 30.436875 days are the mean month; the month so found, or a neighbour, starts on that day or none does.
        long month = (long)Math.Floor(daysSince1970 / 30.436875) + 1970 * 12;
        for (long candidate = month - 1; candidate <= month + 1; candidate++)
        {
            if (candidate >= 0 && DaysSince1970((int)(candidate / 12), (int)(candidate % 12) + 1, 1) == daysSince1970) return true;
        }
        return false;
    }

    private static int DaysIn(int year, int month) =>
        month == 2 && year % 4 == 0 && (year % 100 != 0 || year % 400 == 0) ? 29 : DaysOfMonth[month - 1];

    private static TimeFault ReadOffset(ReadOnlySpan<byte> text, out int minutes)
    {
        minutes = 0;
        if (text.Length != 6 || text[0] is not ((byte)'+' or (byte)'-') || text[3] != ':') return TimeFault.Form;
        int hours = TwoDigits(text, 1), minutesOfHour = TwoDigits(text, 4);
        if ((hours | minutesOfHour) < 0) return TimeFault.Form;
        if (hours > 23 || minutesOfHour > 59) return TimeFault.Calendar;
        minutes = hours * 60 + minutesOfHour;
        if (text[0] == '-') minutes = -minutes;
        return TimeFault.None;
    }

    private static bool TryFraction(ReadOnlySpan<byte> text, ref int at, out int microseconds)
    {
        microseconds = 0;
        int unit = 100_000;
        int start = at;
        for (; at < text.Length && (uint)(text[at] - '0') <= 9; at++)
        {
            microseconds += (text[at] - '0') * unit;
            unit /= 10;
        }
        return at > start;
    }

    /// <summary>The number that two digits make, or a negative one if they are not digits.</summary>
    private static int TwoDigits(ReadOnlySpan<byte> text, int at)
    {
        uint tens = (uint)(text[at] - '0'), ones = (uint)(text[at + 1] - '0');
        return tens > 9 || ones > 9 ? -1 : (int)(tens * 10 + ones);
    }
}
