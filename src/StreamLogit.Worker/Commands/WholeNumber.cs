using System.CommandLine.Parsing;
using System.Globalization;
using System.Numerics;

namespace StreamLogit.Worker.Commands;

/// <summary>Reads whole numbers of the command line within their limits.</summary>
internal static class WholeNumber
{
    /// <summary>A parser for an option's one value.</summary>
    public static Func<ArgumentResult, T?> Between<T>(string option, T minimum, T maximum) where T : struct, IBinaryInteger<T>, IMinMaxValue<T> => result =>
    {
        string text = result.Tokens.Count == 1 ? result.Tokens[0].Value : "";
        if (T.TryParse(text, NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out T number) && number >= minimum && number <= maximum) return number;
        string limits = maximum == T.MaxValue ? $"from {minimum} on" : $"from {minimum} to {maximum}";
        result.AddError($"{option} takes a whole number {limits}, not '{text}'.");
        return null;
    };
}
