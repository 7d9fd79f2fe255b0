using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Fitting;

/// <summary>
/// Logistic regression with an L2 penalty on sparse rows: Newton's method whose steps are found by conjugate gradients (Nocedal &amp; Wright, Numerical
/// Optimization, 2nd ed., 2006, algorithm 7.1), preconditioned by the diagonal. No matrix is formed: memory is that of the rows plus 8 bytes
/// a row and some vectors of the length of the columns. With the penalty every fit has an answer, separated labels or not. Deterministic.
/// </summary>
public static class PenalisedLikelihood
{
    private const int MostSteps = 100;
    private const int MostInnerSteps = 500;
    private const int MostHalvings = 40;

    // The share of the decrease that the slope promises which a step must bring (Armijo).
    private const double SufficientDecrease = 1e-4;

    // The rounding error of the loss against its size, which hides what the last steps gain.
    private const double Rounding = 1e-12;

    /// <summary>Fits the rows of all parts together.</summary>
    /// <param name="parts">The rows, all with <paramref name="columns"/>.</param>
    /// <param name="columns">Their columns.</param>
    /// <param name="options">The penalty and the tolerance.</param>
    /// <param name="start">A fit with the same columns, or fewer of them, to start from: the result is the same within the tolerance, sooner.</param>
    /// <exception cref="ArgumentException">An option is out of its range, or the parts have other columns.</exception>
    public static SparseFit Fit(IReadOnlyList<SparseRows> parts, SparseColumns columns, PenaltyOptions options, SparseFit? start = null)
    {
        if (!(options.L2 > 0 && double.IsFinite(options.L2))) throw new ArgumentException("the penalty is not above 0", nameof(options));
        if (!(options.ToleranceNats > 0)) throw new ArgumentException("the tolerance is not above 0", nameof(options));
        if (parts.Any(p => p.Columns != columns)) throw new ArgumentException("the rows have other columns", nameof(parts));

        long rows = parts.Sum(p => p.Count);
        double zeros = 0, ones = 0;
        foreach (var chunk in parts.SelectMany(p => p.Chunks))
            for (int i = 0; i < chunk.Count; i++)
            {
                if (chunk.Labels[i] == 1) ones += chunk.Weight(i);
                else zeros += chunk.Weight(i);
            }
        var loss = new PenalisedLoss(parts, columns.Count, options.L2);
        var at = new double[columns.Count + 1];
        if (zeros == 0 || ones == 0) return OneClass(loss, columns, at, rows, zeros, ones);

        at[^1] = start?.Intercept ?? Elementary.Log(ones / zeros);
        start?.CopyTo(at);
        return Descend(loss, columns, at, rows, options.ToleranceNats);
    }

    private static SparseFit Descend(PenalisedLoss loss, SparseColumns columns, double[] at, long rows, double tolerance)
    {
        int length = at.Length, passes = 1, steps = 0;
        var newton = new ConjugateGradients(length);
        var there = new double[length];
        loss.Evaluate(at);
        while (steps < MostSteps)
        {
            steps++;
            passes += newton.Solve(loss, MostInnerSteps);
            double before = loss.Value, part = 1;
            bool isLast = 0.5 * newton.Decrement <= Math.Max(tolerance, Rounding * before);
            int halvings = 0;
            for (; ; halvings++, part /= 2)
            {
                for (int j = 0; j < length; j++) there[j] = at[j] + part * newton.Step[j];
                loss.Evaluate(there);
                passes++;
                if (loss.Value <= before - SufficientDecrease * part * newton.Decrement || halvings == MostHalvings) break;
                if (isLast && loss.Value <= before + Rounding * before) break;
            }
            if (halvings == MostHalvings)
            {
                loss.Evaluate(at);
                return Result(FitOutcome.NotConverged, "The loss could not be lowered any further although it is not at its smallest: values may be too far apart in size.");
            }
            (at, there) = (there, at);
            if (isLast) return Result(FitOutcome.Converged, null);
        }
        return Result(FitOutcome.NotConverged, $"The coefficients did not settle in {MostSteps} Newton steps.");

        SparseFit Result(FitOutcome outcome, string? finding) => new(columns, at[..^1], at[^1])
        {
            Outcome = outcome,
            Findings = finding is null ? [] : [finding],
            Rows = rows,
            LogLoss = loss.LogLoss,
            Objective = loss.Value,
            Steps = steps,
            Passes = passes,
        };
    }

    // The intercept is free and would go without end; half a row more of each label keeps it finite (Krichevsky & Trofimov).
    private static SparseFit OneClass(PenalisedLoss loss, SparseColumns columns, double[] at, long rows, double zeros, double ones)
    {
        at[^1] = Elementary.Log((ones + 0.5) / (zeros + 0.5));
        loss.Evaluate(at);
        string finding = rows == 0
            ? "There are no rows to fit."
            : $"All {rows} rows have label {(ones == 0 ? 0 : 1)}: there is nothing to tell apart, and only the intercept is fitted.";
        return new SparseFit(columns, at[..^1], at[^1])
        {
            Outcome = FitOutcome.OneClass,
            Findings = [finding],
            Rows = rows,
            LogLoss = loss.LogLoss,
            Objective = loss.Value,
            Passes = 1,
        };
    }
}
