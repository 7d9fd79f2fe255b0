namespace StreamLogit.Engine.Fitting;

/// <summary>
/// Tells whether a direction separates the labels (Albert &amp; Anderson, Biometrika 71, 1984, 1): along it no row's likelihood falls and some
/// rise without end, so that no finite coefficients have the largest likelihood. Newton's steps on separated labels turn into such a direction.
/// </summary>
internal sealed class Separation(DenseRows rows, ColumnScales scales, int[] columns)
{
    // What counts as 0, against the terms that cancel in the row. The rows of which separating columns say nothing come under it
    // after some 20 steps, because each step divides what the separated rows pull at them by e.
    private const double Zero = 1e-9;

    // What lies between may still be on its way to 0.
    private const double ClearlyNotZero = 1e-6;

    /// <summary>Looks at a direction.</summary>
    /// <param name="direction">The intercept and the columns, in standardised units.</param>
    /// <returns>The outcome that it proves, or null.</returns>
    public FitOutcome? Of(ReadOnlySpan<double> direction)
    {
        double intercept = direction[0];
        var own = new double[columns.Length];
        for (int k = 0; k < own.Length; k++)
        {
            own[k] = direction[k + 1] / scales.Deviations[columns[k]];
            intercept -= own[k] * scales.Means[columns[k]];
        }

        bool someRise = false, someAreUnclear = false;
        var untouched = new DenseRows(rows.Columns);
        var standardised = new double[columns.Length];
        foreach (var chunk in rows.Chunks)
            for (int i = 0; i < chunk.Count; i++)
            {
                var values = chunk.Row(i);
                scales.Standardise(values, columns, standardised);

                // Either sum alone is 0 for some rows: this one at the mean, the other at the columns' zeros.
                double change = direction[0], terms = Math.Abs(direction[0]), ownTerms = Math.Abs(intercept);
                for (int k = 0; k < columns.Length; k++)
                {
                    double term = direction[k + 1] * standardised[k];
                    change += term;
                    terms += Math.Abs(term);
                    ownTerms += Math.Abs(own[k] * values[columns[k]]);
                }
                double label = chunk.Labels[i];
                double share = Math.Abs(change) / Math.Max(terms, ownTerms);
                if (!(share > Zero)) untouched.Add(values, label, chunk.Weights[i]);
                else if (label == (change > 0 ? 1 : 0)) (someRise, someAreUnclear) = (true, someAreUnclear || share < ClearlyNotZero);
                else return null;
            }
        if (!someRise) return null;
        if (untouched.Count == 0) return FitOutcome.PerfectSeparation;
        if (someAreUnclear) return null;

        // Where another direction separates the other rows, this one with a little of that one separates all.
        return MaximumLikelihood.Fit(untouched).Outcome is FitOutcome.OneClass or FitOutcome.PerfectSeparation
            ? FitOutcome.PerfectSeparation
            : FitOutcome.QuasiSeparation;
    }

    /// <summary>Says what separates the labels.</summary>
    public string InWords(FitOutcome outcome, ReadOnlySpan<double> direction) =>
        new SeparationWords(rows, columns).Of(outcome, direction);
}
