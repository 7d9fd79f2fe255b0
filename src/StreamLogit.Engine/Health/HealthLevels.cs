using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health.RollUps;

namespace StreamLogit.Engine.Health;

/// <summary>What is kept of minutes, hours and days.</summary>
internal static class HealthLevels
{
    private const int MinutesOfHour = 60;
    private const int MinutesOfDay = 24 * MinutesOfHour;
    private const long MicrosecondsOfMinute = 60_000_000;

    /// <summary>
    /// The numbers of every bucket are kept as long as the history is asked for; the tallies, which are larger, only as long as some window needs them.
    /// </summary>
    public static RollUpRetention[] Of(HealthOptions options)
    {
        var history = options.History;
        long beyondMinutes = 0, beyondHours = 0;
        foreach (var window in options.Windows)
        {
            long minutes = window.LengthMicroseconds / MicrosecondsOfMinute;
            if (minutes > history.Minutes && minutes <= (long)history.Hours * MinutesOfHour) beyondMinutes = Math.Max(beyondMinutes, minutes);
            if (minutes > (long)history.Hours * MinutesOfHour) beyondHours = Math.Max(beyondHours, minutes);
        }
        int hours = (int)((beyondMinutes + MinutesOfHour - 1) / MinutesOfHour), days = (int)((beyondHours + MinutesOfDay - 1) / MinutesOfDay);
        return
        [
            new RollUpRetention(1, history.Minutes, history.Minutes),
            new RollUpRetention(MinutesOfHour, history.Hours, hours),
            new RollUpRetention(MinutesOfDay, Math.Max(history.Days, days), days),
        ];
    }
}
