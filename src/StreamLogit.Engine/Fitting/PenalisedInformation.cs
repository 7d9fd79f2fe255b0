using MathNet.Numerics.LinearAlgebra.Double;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Fitting;

/// <summary>What a penalised fit knows of the error of its estimates.</summary>
public static class PenalisedInformation
{
    /// <summary>
    /// The standard errors of a fit: the square roots of the diagonal of the inverse of the penalised information. They are the standard deviations of the
    /// posterior with the penalty as its prior, not sampling errors: the penalty also draws the estimates towards 0, which they do not tell.
    /// </summary>
    /// <param name="parts">The rows that were fitted.</param>
    /// <param name="fit">The fit.</param>
    /// <param name="options">The penalty that it was made with.</param>
    /// <returns>Those of the columns, then that of the intercept; NaN where the information is singular. Takes 8 bytes times the square of their number.</returns>
    public static double[] StandardErrors(IReadOnlyList<SparseRows> parts, SparseFit fit, PenaltyOptions options)
    {
        int count = fit.ColumnCount + 1;
        var information = new DenseMatrix(count);
        for (int j = 0; j < count - 1; j++) information[j, j] = options.L2;
        var row = new double[count];
        var entries = new List<int>();
        foreach (var chunk in parts.SelectMany(p => p.Chunks))
            for (int i = 0; i < chunk.Count; i++)
            {
                Array.Clear(row);
                chunk.AddRowTo(row, i);
                row[^1] = 1;
                entries.Clear();
                double logOdds = fit.Intercept;
                for (int j = 0; j < count; j++)
                {
                    if (row[j] == 0) continue;
                    entries.Add(j);
                    if (j < count - 1) logOdds += row[j] * fit.CoefficientOfColumn(j);
                }
                double p = Elementary.Sigmoid(logOdds), curvature = chunk.Weight(i) * p * Elementary.Sigmoid(-logOdds);
                foreach (int j in entries)
                    foreach (int k in entries) information[j, k] += curvature * row[j] * row[k];
            }
        try
        {
            var inverse = information.Cholesky().Solve(DenseMatrix.CreateIdentity(count));
            return [.. Enumerable.Range(0, count).Select(j => Math.Sqrt(inverse[j, j]))];
        }
        catch (ArgumentException)
        {
            return [.. Enumerable.Repeat(double.NaN, count)]; // the only way in which the library says that a matrix is not positive definite
        }
    }
}
