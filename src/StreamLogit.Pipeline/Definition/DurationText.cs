using System.Globalization;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Durations as definitions write them: a number and a unit, <c>250ms</c>, <c>90m</c>, <c>1.5h</c>, <c>30d</c>.</summary>
public static class DurationText
{
    /// <summary>What a duration looks like, for messages.</summary>
    public const string Form = "a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\"";

    private const int MostDigits = 20;
    private const decimal LongestMicroseconds = 36_525m * 24 * 3600 * 1_000_000;

    /// <summary>Reads a duration of a whole number of microseconds, at most 100 years.</summary>
    /// <returns>False where the text is none.</returns>
    public static bool TryParse(string text, out long microseconds)
    {
        ArgumentNullException.ThrowIfNull(text);
        microseconds = 0;
        int end = text.AsSpan().LastIndexOfAnyInRange('0', '9') + 1;
        decimal? unit = text[end..] switch
        {
            "ms" => 1_000m,
            "s" => 1_000_000m,
            "m" => 60_000_000m,
            "h" => 3_600_000_000m,
            "d" => 86_400_000_000m,
            "w" => 604_800_000_000m,
            _ => null,
        };
        var digits = text.AsSpan(0, end);
        if (unit is null || digits.IsEmpty || digits.Length > MostDigits || !char.IsAsciiDigit(digits[0])) return false;
        if (!decimal.TryParse(digits, NumberStyles.AllowDecimalPoint, CultureInfo.InvariantCulture, out decimal number)) return false;
        if (number > LongestMicroseconds / unit) return false;
        decimal exact = number * unit.Value;
        if (exact != decimal.Truncate(exact)) return false;
        microseconds = (long)exact;
        return true;
    }

    /// <summary>The duration with the largest unit that leaves a whole number: <c>90m</c>.</summary>
    public static string Format(long microseconds)
    {
        foreach (var (name, unit) in new[] { ("w", 604_800_000_000), ("d", 86_400_000_000), ("h", 3_600_000_000), ("m", 60_000_000), ("s", 1_000_000L) })
        {
            if (microseconds != 0 && microseconds % unit == 0) return FormattableString.Invariant($"{microseconds / unit}{name}");
        }
        return FormattableString.Invariant($"{microseconds / 1000m}ms");
    }
}
