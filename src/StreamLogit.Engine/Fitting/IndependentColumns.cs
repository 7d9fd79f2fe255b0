using System.Globalization;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;
using MathNet.Numerics.LinearAlgebra.Factorization;

namespace StreamLogit.Engine.Fitting;

/// <summary>
/// Finds the columns that earlier ones and the intercept determine. They can have no coefficient of their own and are left out, the later ones first,
/// as is the custom. The triangular factor of the standardised rows is built block after block, so that the rows are never copied as a whole.
/// </summary>
internal sealed class IndependentColumns
{
    // A column is determined when what the others leave of it is this small against its length; R's glm uses the same number.
    private const double Tolerance = 1e-7;
    private const int RowsPerBlock = 1024;
    private const int MostNamed = 5;

    public IndependentColumns(DenseRows rows, ColumnScales scales)
    {
        var findings = new List<string>();
        var varying = new List<int>();
        for (int j = 0; j < rows.Columns.Length; j++)
        {
            if (scales.Deviations[j] > 0) varying.Add(j);
            else findings.Add($"'{rows.Columns[j]}' has the same value, {Text(scales.Means[j])}, in every row and gets no coefficient.");
        }
        Kept = [.. varying];
        if (varying.Count > 0) Kept = Reduce(rows, scales, [.. varying], findings);
        Findings = [.. findings];
    }

    /// <summary>The columns to fit, in their order.</summary>
    public int[] Kept { get; }

    /// <summary>What was left out and why.</summary>
    public string[] Findings { get; }

    private static int[] Reduce(DenseRows rows, ColumnScales scales, int[] columns, List<string> findings)
    {
        var factor = TriangularFactor(rows, scales, columns);
        var kept = new List<int>();
        var directions = new List<Vector<double>>();
        for (int k = 0; k < columns.Length; k++)
        {
            var column = factor.Column(k);
            var rest = column.Clone();

            // Twice, because one pass leaves rounding errors of the size of the tolerance where columns are close.
            for (int pass = 0; pass < 2; pass++)
                foreach (var direction in directions) rest -= direction * direction.DotProduct(rest);
            double length = rest.L2Norm();
            if (length > Tolerance * column.L2Norm())
            {
                kept.Add(k);
                directions.Add(rest / length);
                continue;
            }
            var combination = DenseMatrix.OfColumnVectors([.. kept.Select(factor.Column)]).QR(QRMethod.Thin).Solve(column);
            findings.Add(InWords(rows, scales, columns, k, kept, combination));
        }
        return [.. kept.Select(k => columns[k])];
    }

    private static Matrix<double> TriangularFactor(DenseRows rows, ColumnScales scales, int[] columns)
    {
        int count = columns.Length;
        var stacked = new DenseMatrix(count + RowsPerBlock, count);
        int filled = count;
        var row = new double[count];
        foreach (var chunk in rows.Chunks)
            for (int i = 0; i < chunk.Count; i++)
            {
                scales.Standardise(chunk.Row(i), columns, row);
                stacked.SetRow(filled++, row);
                if (filled == stacked.RowCount) Condense();
            }
        Condense();
        return stacked.SubMatrix(0, count, 0, count);

        void Condense()
        {
            var r = stacked.QR(QRMethod.Thin).R;
            stacked.Clear();
            stacked.SetSubMatrix(0, 0, r);
            filled = count;
        }
    }

    private static string InWords(
        DenseRows rows, ColumnScales scales, int[] columns, int determined, List<int> by, Vector<double> standardised)
    {
        int column = columns[determined];
        double constant = scales.Means[column];
        var terms = new List<string>();
        for (int i = 0; i < by.Count; i++)
        {
            // What the rounding of the rows leaves is no part of the relation.
            if (Math.Abs(standardised[i]) < 1e3 * Tolerance) continue;
            int other = columns[by[i]];
            double factor = standardised[i] * scales.Deviations[column] / scales.Deviations[other];
            constant -= factor * scales.Means[other];
            string sign = factor < 0 ? "- " : terms.Count > 0 ? "+ " : "";
            string size = Math.Abs(Math.Abs(factor) - 1) < 1e-6 ? "" : Text(Math.Abs(factor)) + " ";
            terms.Add($"{sign}{size}'{rows.Columns[other]}'");
        }
        if (Math.Abs(constant) > 1e-6 * (Math.Abs(scales.Means[column]) + scales.Deviations[column]))
            terms.Add((constant < 0 ? "- " : "+ ") + Text(Math.Abs(constant)));
        string relation = terms.Count <= MostNamed
            ? $"it is {string.Join(" ", terms)} in every row"
            : $"it is {string.Join(" ", terms.Take(MostNamed))} and {terms.Count - MostNamed} more terms in every row";
        return $"'{rows.Columns[column]}' is determined by other columns ({relation}) and gets no coefficient.";
    }

    private static string Text(double value) => value.ToString("G6", CultureInfo.InvariantCulture);
}
