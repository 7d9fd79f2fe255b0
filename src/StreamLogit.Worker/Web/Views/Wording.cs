using System.Globalization;
using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Worker.Web.Views;

/// <summary>Figures within sentences.</summary>
internal static class Wording
{
    private const double SecondsPerMinute = 60, SecondsPerHour = 3600, SecondsPerDay = 86400;

    public static string Count(double value) => value.ToString("N0", CultureInfo.InvariantCulture);

    /// <summary>Labels promised: with a decimal where that matters.</summary>
    public static string Amount(double value) => value.ToString(value < 1000 && value != Math.Round(value) ? "N1" : "N0", CultureInfo.InvariantCulture);

    public static string Share(double value) => !double.IsFinite(value) ? "–"
        : value is > 0 and < 0.0005 ? "under 0.1 %"
        : (value * 100).ToString(value < 0.1 ? "0.##" : "0.#", CultureInfo.InvariantCulture) + " %";

    public static string Figure(double value) => double.IsFinite(value) ? value.ToString("0.####", CultureInfo.InvariantCulture) : "–";

    public static string Ratio(double value) => double.IsFinite(value) ? value.ToString("0.00", CultureInfo.InvariantCulture) : "–";

    /// <summary>A range of numbers of labels: the least and the most whole number in it, where there are some.</summary>
    public static string Range(Interval range)
    {
        var (low, high) = (Math.Ceiling(range.Low), Math.Floor(range.High));
        return low <= high
            ? string.Create(CultureInfo.InvariantCulture, $"{low:N0} to {high:N0}")
            : string.Create(CultureInfo.InvariantCulture, $"{range.Low:0.#} to {range.High:0.#}");
    }

    public static string Of(double count, string singular, string plural) => $"{Count(count)} {(count == 1 ? singular : plural)}";

    /// <summary>A length of time, to two digits or so.</summary>
    public static string Duration(double seconds) => seconds switch
    {
        _ when !double.IsFinite(seconds) => "–",
        < 2 * SecondsPerMinute => Number(seconds, "second", "seconds"),
        < 2 * SecondsPerHour => Number(seconds / SecondsPerMinute, "minute", "minutes"),
        < 2 * SecondsPerDay => Number(seconds / SecondsPerHour, "hour", "hours"),
        _ => Number(seconds / SecondsPerDay, "day", "days"),
    };

    /// <summary>A window as it stands behind "the last": <c>hour</c>, <c>7 days</c>.</summary>
    public static string LastWindow(long microseconds)
    {
        double seconds = microseconds / 1e6;
        return seconds switch
        {
            SecondsPerMinute => "minute",
            SecondsPerHour => "hour",
            SecondsPerDay => "day",
            _ when seconds % SecondsPerDay == 0 => Of(seconds / SecondsPerDay, "day", "days"),
            _ when seconds % SecondsPerHour == 0 => Of(seconds / SecondsPerHour, "hour", "hours"),
            _ => Of(seconds / SecondsPerMinute, "minute", "minutes"),
        };
    }

    public static string Time(long microseconds) =>
        DateTimeOffset.UnixEpoch.AddMicroseconds(microseconds).ToString("d MMMM yyyy HH:mm 'UTC'", CultureInfo.InvariantCulture);

    private static string Number(double value, string singular, string plural)
    {
        string text = value.ToString(value < 10 ? "0.#" : "0", CultureInfo.InvariantCulture);
        return $"{text} {(text == "1" ? singular : plural)}";
    }
}
