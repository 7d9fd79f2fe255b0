using System.Collections.Immutable;
using MathNet.Numerics;
using MathNet.Numerics.LinearAlgebra;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Fitting;

/// <summary>
/// Logistic regression by maximum likelihood: Newton's method, which for this model is the same as iteratively reweighted least squares
/// (McCullagh &amp; Nelder, Generalized Linear Models, 2nd ed., 1989, 2.5). Deterministic.
/// </summary>
public static class MaximumLikelihood
{
    private const int MostSteps = 60;
    private const int MostHalvings = 40;

    // The squared length of the Newton step in standard errors. After the step that falls below it the error is of the order of its square.
    private const double SmallestDecrement = 1e-16;

    /// <summary>Fits the intercept and every column.</summary>
    /// <param name="rows">The rows. They stay as they are.</param>
    public static LogisticFit Fit(DenseRows rows)
    {
        double weight = 0, ones = 0;
        foreach (var chunk in rows.Chunks)
            for (int i = 0; i < chunk.Count; i++)
            {
                weight += chunk.Weights[i];
                ones += chunk.Weights[i] * chunk.Labels[i];
            }
        var unfinished = new LogisticFit { Outcome = FitOutcome.OneClass, Findings = [], Rows = rows.Count, Weight = weight };
        if (rows.Count == 0) return unfinished with { Findings = ["There are no rows to fit."] };
        if (ones == 0 || ones == weight)
            return unfinished with { Findings = [$"All {rows.Count} rows have label {(ones == 0 ? 0 : 1)}: there is nothing to tell apart."] };

        var scales = new ColumnScales(rows);
        var independent = new IndependentColumns(rows, scales);
        return Ascend(rows, scales, independent, Elementary.Log(ones / (weight - ones)), unfinished with { Findings = [.. independent.Findings] });
    }

    private static LogisticFit Ascend(
        DenseRows rows, ColumnScales scales, IndependentColumns independent, double baseLogOdds, LogisticFit unfinished)
    {
        var likelihood = new DenseLikelihood(rows, scales, independent.Kept);
        var separation = new Separation(rows, scales, independent.Kept);
        var at = new double[independent.Kept.Length + 1];
        at[0] = baseLogOdds;
        likelihood.Evaluate(at);
        double nullDeviance = likelihood.Deviance;

        for (int steps = 1; steps <= MostSteps; steps++)
        {
            if (likelihood.NewtonStep(out double decrement) is not { } step) break;
            bool isLast = decrement < SmallestDecrement;
            if (!isLast && separation.Of(step) is { } outcome)
                return unfinished with { Outcome = outcome, Steps = steps, Findings = [.. unfinished.Findings, separation.InWords(outcome, step)] };
            if (!Move(likelihood, at, step)) isLast = true;
            if (!isLast) continue;
            if (decrement > Math.Sqrt(SmallestDecrement) || likelihood.Covariance() is not { } covariance) break;
            return unfinished with
            {
                Outcome = FitOutcome.Converged,
                Steps = steps,
                Deviance = likelihood.Deviance,
                NullDeviance = nullDeviance,
                Coefficients = Estimates(rows, scales, independent.Kept, at, covariance),
            };
        }
        return unfinished with
        {
            Outcome = FitOutcome.NotConverged,
            Findings = [.. unfinished.Findings, "The estimates did not settle: the columns nearly separate the labels or nearly determine each other. A fit with a penalty has an answer."],
        };
    }

    /// <summary>Goes the step, or as much of it as does not raise the deviance. Leaves the likelihood evaluated there.</summary>
    /// <returns>Whether any part of it was gone.</returns>
    private static bool Move(DenseLikelihood likelihood, double[] at, double[] step)
    {
        double before = likelihood.Deviance;
        double part = 1;
        var there = new double[at.Length];
        for (int halvings = 0; halvings <= MostHalvings; halvings++, part /= 2)
        {
            for (int k = 0; k < at.Length; k++) there[k] = at[k] + part * step[k];
            likelihood.Evaluate(there);

            // Near the maximum the deviance is flat and rises by its rounding error.
            if (!(likelihood.Deviance <= before + 1e-12 * (before + 1))) continue;
            there.CopyTo(at, 0);
            return true;
        }
        likelihood.Evaluate(at);
        return false;
    }

    private static ImmutableArray<CoefficientEstimate> Estimates(
        DenseRows rows, ColumnScales scales, int[] kept, double[] at, Matrix<double> covariance)
    {
        // The row of the transformation back: intercept = a0 - sum of a_k mean_k / deviation_k, with the variance to match.
        var toIntercept = Vector<double>.Build.Dense(at.Length);
        toIntercept[0] = 1;
        var estimates = new CoefficientEstimate[rows.Columns.Length + 1];
        for (int j = 0; j < rows.Columns.Length; j++)
            estimates[j + 1] = new CoefficientEstimate(rows.Columns[j], double.NaN, double.NaN, double.NaN, double.NaN);
        double intercept = at[0];
        for (int k = 0; k < kept.Length; k++)
        {
            double deviation = scales.Deviations[kept[k]], mean = scales.Means[kept[k]];
            toIntercept[k + 1] = -mean / deviation;
            intercept -= at[k + 1] * mean / deviation;
            estimates[kept[k] + 1] = Estimate(rows.Columns[kept[k]], at[k + 1] / deviation, Math.Sqrt(covariance[k + 1, k + 1]) / deviation);
        }
        estimates[0] = Estimate(CoefficientEstimate.Intercept, intercept, Math.Sqrt(toIntercept.DotProduct(covariance * toIntercept)));
        return [.. estimates];
    }

    private static CoefficientEstimate Estimate(string name, double estimate, double standardError)
    {
        double z = estimate / standardError;
        return new CoefficientEstimate(name, estimate, standardError, z, SpecialFunctions.Erfc(Math.Abs(z) / Math.Sqrt(2)));
    }
}
