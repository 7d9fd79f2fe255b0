namespace StreamLogit.Pipeline.Scenarios;

/// <summary>The time in which scenarios play.</summary>
internal static class ScenarioCalendar
{
    public const long MillisecondsPerHour = 3_600_000;
    public const long MillisecondsPerDay = 24 * MillisecondsPerHour;

    /// <summary>2026-03-02T00:00:00Z, a Monday.</summary>
    public const long Start = 1_772_409_600_000;

    /// <summary>Days after which the stream's times would come near the year 10000, which RFC 3339 cannot write.</summary>
    public const long MaximumDays = 2_900_000;

    /// <summary>The hour of the day, 0 to 23.</summary>
    public static int HourOfDay(long milliseconds) => (int)(milliseconds / MillisecondsPerHour % 24);

    /// <summary>The day of the week, 0 for Monday.</summary>
    public static int DayOfWeek(long milliseconds) => (int)((milliseconds - Start) / MillisecondsPerDay % 7);

    /// <summary>The cosine of the day's course: 1 at the given hour, -1 twelve hours later.</summary>
    public static double DailyCosine(long milliseconds, double peakHour) =>
        Math.Cos(2 * Math.PI * (milliseconds % MillisecondsPerDay / (double)MillisecondsPerHour - peakHour) / 24);
}
