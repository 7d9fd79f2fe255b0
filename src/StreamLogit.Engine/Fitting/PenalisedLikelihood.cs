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

        var loss = new PenalisedLoss(parts, columns.Count, options.L2);
        var at = new double[columns.Count + 1];
        if (loss.Zeros == 0 || loss.Ones == 0) return OneClass(loss, columns, at);
        at[^1] = start?.Intercept ?? Elementary.Log(loss.Ones / loss.Zeros);
        start?.CopyTo(at);
        return Descend(loss, columns, at, options.ToleranceNats);
    }

    private static SparseFit Descend(PenalisedLoss loss, SparseColumns columns, double[] at, double tolerance)
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
                return Result(
                    loss, columns, at, FitOutcome.NotConverged, steps, passes,
                    "The loss could not be lowered any further although it is not at its smallest: values may be too far apart in size.");
            }
            (at, there) = (there, at);
            if (isLast) return Result(loss, columns, at, FitOutcome.Converged, steps, passes);
        }
        return Result(loss, columns, at, FitOutcome.NotConverged, steps, passes, $"The coefficients did not settle in {MostSteps} Newton steps.");
    }

    // The intercept is free and would go without end; half a row more of each label keeps it finite (Krichevsky & Trofimov).
    private static SparseFit OneClass(PenalisedLoss loss, SparseColumns columns, double[] at)
    {
        at[^1] = Elementary.Log((loss.Ones + 0.5) / (loss.Zeros + 0.5));
        loss.Evaluate(at);
        return Result(loss, columns, at, FitOutcome.OneClass, steps: 0, passes: 1, loss.Rows == 0
            ? "There are no rows to fit."
            : $"All {loss.Rows} rows have label {(loss.Ones == 0 ? 0 : 1)}: there is nothing to tell apart, and only the intercept is fitted.");
    }

    private static SparseFit Result(
        PenalisedLoss loss, SparseColumns columns, double[] at, FitOutcome outcome, int steps, int passes, params string[] findings) =>
        new(columns, at[..^1], at[^1])
        {
            Outcome = outcome,
            Findings = [.. findings],
            Rows = loss.Rows,
            Weight = loss.Zeros + loss.Ones,
            LogLoss = loss.LogLoss,
            BaseRateLogLoss = loss.BaseRateLogLoss,
            Objective = loss.Value,
            Steps = steps,
            Passes = passes,
        };
}
