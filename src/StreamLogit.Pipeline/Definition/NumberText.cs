using System.Globalization;
using System.Text.RegularExpressions;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Reads the digits of JSON numbers without losing any: <c>1e5</c> and <c>100.0</c> are whole, <c>1e-400</c> is not 0.</summary>
internal static partial class NumberText
{
    private const int MostDigits = 20;

    /// <summary>Whether the text is a JSON number (RFC 8259).</summary>
    public static bool IsNumber(string text) => NumberPattern().IsMatch(text);

    /// <summary>Whether the number is exactly 0.</summary>
    public static bool IsZero(string text)
    {
        int exponent = text.AsSpan().IndexOfAny('e', 'E');
        var mantissa = exponent < 0 ? text : text.AsSpan(0, exponent);
        return mantissa.IndexOfAnyInRange('1', '9') < 0;
    }

    /// <summary>Reads a whole number of at most 20 digits.</summary>
    public static bool TryWhole(string text, out decimal number)
    {
        number = 0;
        if (IsZero(text)) return true;
        int exponentAt = text.AsSpan().IndexOfAny('e', 'E');
        int exponent = 0;
        if (exponentAt >= 0 && !int.TryParse(text.AsSpan(exponentAt + 1), NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out exponent)) return false;
        string mantissa = exponentAt < 0 ? text : text[..exponentAt];
        int point = mantissa.IndexOf('.', StringComparison.Ordinal);
        string digits = (point < 0 ? mantissa : mantissa.Remove(point, 1)).TrimStart('-').TrimStart('0');
        long zeros = exponent - (point < 0 ? 0L : mantissa.Length - point - 1);
        string significant = digits.TrimEnd('0');
        zeros += digits.Length - significant.Length;
        if (zeros < 0 || significant.Length + zeros > MostDigits) return false;
        number = decimal.Parse(significant, NumberStyles.None, CultureInfo.InvariantCulture);
        for (long i = 0; i < zeros; i++) number *= 10;
        if (text[0] == '-') number = -number;
        return true;
    }

    [GeneratedRegex(@"\A-?(0|[1-9][0-9]*)(\.[0-9]+)?([eE][+-]?[0-9]+)?\z")]
    private static partial Regex NumberPattern();
}
