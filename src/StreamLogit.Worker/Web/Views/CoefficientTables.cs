using System.Collections.Immutable;
using StreamLogit.Engine;

namespace StreamLogit.Worker.Web.Views;

/// <summary>The largest coefficients, and how they moved, as tables.</summary>
internal static class CoefficientTables
{
    /// <summary>How many coefficients are looked for: those that are shown, and more, so that it is known what they were when they were smaller.</summary>
    public const int Kept = 200;

    private const int Shown = 25;
    private const int Drawn = 6;

    public static DataTable Largest(CoefficientTrail trail, long sinceMicroseconds)
    {
        var table = new DataTable(
            "coefficients", "The largest coefficients",
            new("feature", "feature", ColumnKind.Text),
            new("coefficient", "coefficient", ColumnKind.Figure),
            new("before", "before", ColumnKind.Figure),
            new("change", "change", ColumnKind.Figure),
            new("beforeAt", "before was at", ColumnKind.Time));
        if (trail.Present is not { } present) return table;
        var before = trail.Before(sinceMicroseconds);
        var earlier = before is null ? [] : Values(before);
        foreach (var (feature, value) in present.Coefficients.Take(Shown))
        {
            bool isKnown = earlier.TryGetValue(feature, out double was);
            table.Add(feature, value, isKnown ? was : null, isKnown ? value - was : null, DataTable.Time(before?.ClockMicroseconds));
        }
        return table;
    }

    /// <summary>The coefficients that are largest now, over the trail.</summary>
    public static DataTable Moves(CoefficientTrail trail)
    {
        ImmutableArray<string> drawn = [.. (trail.Present?.Coefficients ?? []).Take(Drawn).Select(coefficient => coefficient.Feature)];
        var table = new DataTable(
            "coefficient-moves", "How the largest coefficients moved",
            [new DataColumn("at", "at", ColumnKind.Time), .. drawn.Select(feature => new DataColumn(feature, feature, ColumnKind.Figure))]);
        foreach (var moment in trail.Moments)
        {
            var values = Values(moment);
            table.Add([DataTable.Time(moment.ClockMicroseconds), .. drawn.Select(feature => values.TryGetValue(feature, out double value) ? (object?)value : null)]);
        }
        return table;
    }

    private static Dictionary<string, double> Values(LargestCoefficients moment)
    {
        var values = new Dictionary<string, double>(moment.Coefficients.Length, StringComparer.Ordinal);
        // Two values of a category that were cut to the same name: the larger coefficient comes first.
        foreach (var (feature, value) in moment.Coefficients) values.TryAdd(feature, value);
        return values;
    }
}
