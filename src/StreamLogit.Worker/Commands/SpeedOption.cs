using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;

namespace StreamLogit.Worker.Commands;

/// <summary><c>--speed</c>: how many times faster than in the records time passes.</summary>
internal static class SpeedOption
{
    private const string Unlimited = "max";

    /// <summary>The option; its value is infinite for <c>max</c>.</summary>
    public static Option<double?> Create() => new("--speed")
    {
        Description = "Let the records' own time pass so many times as fast, as 60x; max, which is as fast as possible, if not given",
        HelpName = "60x|max",
        CustomParser = Read,
    };

    /// <summary>The factor, or null for as fast as possible.</summary>
    public static double? Factor(double? value) => value is { } factor && double.IsFinite(factor) ? factor : null;

    private static double? Read(ArgumentResult result)
    {
        string text = result.Tokens[0].Value;
        if (text == Unlimited) return double.PositiveInfinity;
        bool isFactor = double.TryParse(text.AsSpan().TrimEnd('x'), NumberStyles.AllowDecimalPoint, CultureInfo.InvariantCulture, out double factor);
        if (isFactor && text.EndsWith('x') && factor > 0 && double.IsFinite(factor)) return factor;
        result.AddError($"--speed takes a factor above 0 and an x, as 60x, or max, not '{text}'.");
        return null;
    }
}
