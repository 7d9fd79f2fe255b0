using System.Globalization;
using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>Figures as the report writes them; a dash where there is none.</summary>
internal static class Words
{
    private const string None = "–";

    public static string Mean(double value) => double.IsFinite(value) ? value.ToString("F5", CultureInfo.InvariantCulture) : None;

    public static string Signed(double value) => double.IsFinite(value) ? value.ToString("+0.00000;−0.00000;0.00000", CultureInfo.InvariantCulture) : None;

    public static string Share(double value) => double.IsFinite(value) ? value.ToString("0.0 %", CultureInfo.InvariantCulture) : None;

    public static string Ratio(double value) => double.IsFinite(value) ? value.ToString("F3", CultureInfo.InvariantCulture) : None;

    public static string Count(double value) => value.ToString("#,0.##", CultureInfo.InvariantCulture);

    public static string Interval(in Difference difference) =>
        double.IsFinite(difference.Low) ? $"{Signed(difference.Low)} to {Signed(difference.High)}" : None;

    /// <summary>An e-value, whose logarithm may be beyond what a number holds.</summary>
    public static string EValue(double log) => log switch
    {
        > 9.2 => "10^" + (log / Math.Log(10)).ToString("F0", CultureInfo.InvariantCulture),
        < -6.9 => "under 0.001",
        _ => Math.Exp(log).ToString("G3", CultureInfo.InvariantCulture),
    };

    public static string Day(long microseconds) => DateTime.UnixEpoch.AddMicroseconds(microseconds).ToString("yyyy-MM-dd", CultureInfo.InvariantCulture);

    public static string Span(RecordSpan span)
    {
        string from = span.FromMicroseconds == long.MinValue ? "" : $"from {Time(span.FromMicroseconds)}";
        string to = span.ToMicroseconds == long.MaxValue ? "" : $"before {Time(span.ToMicroseconds)}";
        return string.Join(" and ", new[] { from, to }.Where(part => part.Length > 0));
    }

    private static string Time(long microseconds) => DateTime.UnixEpoch.AddMicroseconds(microseconds).ToString("yyyy-MM-ddTHH:mm:ss.FFFFFFZ", CultureInfo.InvariantCulture);

    public static string Duration(long microseconds)
    {
        double hours = microseconds / 3.6e9;
        return hours < 24 ? $"{hours:0.#} h" : hours == 24 ? "1 day" : $"{hours / 24:0.#} days";
    }

    /// <summary>A number of things, in the singular or the plural.</summary>
    public static string Of(long count, string singular, string plural) => $"{Count(count)} {(count == 1 ? singular : plural)}";
}
