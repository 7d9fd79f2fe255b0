namespace StreamLogit.Engine.Fitting;

/// <summary>Says in plain words what separates the labels.</summary>
internal sealed class SeparationWords(DenseRows rows, int[] columns)
{
    private const string NoEstimates = "No finite coefficients have the largest likelihood.";

    // A column takes part in the direction when its term is this large against the largest one.
    private const double SmallestPart = 1e-3;

    /// <param name="outcome">What the direction proves.</param>
    /// <param name="direction">The intercept and the columns, in standardised units.</param>
    public string Of(FitOutcome outcome, ReadOnlySpan<double> direction)
    {
        var single = columns.Select(OfColumn).OfType<string>().ToList();
        if (single.Count > 0)
            return $"{string.Join(" ", single.Take(3))} {NoEstimates} Leave the column out, merge it with another or fit with a penalty.";

        double largest = 0;
        for (int k = 1; k < direction.Length; k++) largest = Math.Max(largest, Math.Abs(direction[k]));
        var parts = new List<string>();
        for (int k = 1; k < direction.Length; k++)
            if (Math.Abs(direction[k]) > SmallestPart * largest) parts.Add($"'{rows.Columns[columns[k - 1]]}'");
        string which = parts.Count == 1 ? parts[0] : $"A combination of {Listed(parts)}";
        string what = outcome == FitOutcome.PerfectSeparation
            ? "separates the rows with label 1 from those with label 0 perfectly"
            : "separates some rows with label 1 from some with label 0 perfectly";
        return $"{which} {what}. {NoEstimates} Leave one of them out or fit with a penalty.";
    }

    private string? OfColumn(int column)
    {
        double lowestOne = double.PositiveInfinity, highestOne = double.NegativeInfinity;
        double lowestZero = double.PositiveInfinity, highestZero = double.NegativeInfinity;
        foreach (var chunk in rows.Chunks)
            for (int i = 0; i < chunk.Count; i++)
            {
                double value = chunk.Row(i)[column];
                if (chunk.Labels[i] > 0) (lowestOne, highestOne) = (Math.Min(lowestOne, value), Math.Max(highestOne, value));
                if (chunk.Labels[i] < 1) (lowestZero, highestZero) = (Math.Min(lowestZero, value), Math.Max(highestZero, value));
            }
        string name = $"'{rows.Columns[column]}'";
        if (highestZero < lowestOne) return Perfect(name, highestZero, 0, lowestOne, 1);
        if (highestOne < lowestZero) return Perfect(name, highestOne, 1, lowestZero, 0);
        if (highestZero == lowestOne) return Quasi(name, lowestOne, lowestZero < lowestOne ? 0 : null, highestOne > lowestOne ? 1 : null);
        if (highestOne == lowestZero) return Quasi(name, lowestZero, lowestOne < lowestZero ? 1 : null, highestZero > lowestZero ? 0 : null);
        return null;
    }

    private static string Perfect(string name, double low, int labelBelow, double high, int labelAbove) => FormattableString.Invariant(
        $"{name} separates the labels perfectly: every row with {name} up to {low:G6} has label {labelBelow}, every row from {high:G6} on has label {labelAbove}.");

    private static string Quasi(string name, double border, int? labelBelow, int? labelAbove)
    {
        string below = labelBelow is null ? "" : FormattableString.Invariant($"every row with {name} below {border:G6} has label {labelBelow}");
        string above = labelAbove is null ? "" : FormattableString.Invariant($"every row with {name} above {border:G6} has label {labelAbove}");
        string both = below + (below != "" && above != "" ? " and " : "") + above + ".";
        return char.ToUpperInvariant(both[0]) + both[1..];
    }

    private static string Listed(List<string> parts) => parts.Count <= 6
        ? $"{string.Join(", ", parts.SkipLast(1))} and {parts[^1]}"
        : $"{string.Join(", ", parts.Take(5))} and {parts.Count - 5} more columns";
}
