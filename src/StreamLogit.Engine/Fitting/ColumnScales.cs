using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Fitting;

/// <summary>
/// Mean and standard deviation of every column. Fits work with columns of mean 0 and variance 1, where one tolerance means the same for
/// all of them and the information matrix is well conditioned; the coefficients are brought back to the columns' own units at the end.
/// </summary>
internal sealed class ColumnScales
{
    // A standard deviation this small against the column's size is the rounding of a constant.
    private const double SmallestRelativeDeviation = 1e-12;

    public ColumnScales(DenseRows rows)
    {
        var moments = new RunningMoments[rows.Columns.Length];
        foreach (var chunk in rows.Chunks)
            for (int i = 0; i < chunk.Count; i++)
            {
                var values = chunk.Row(i);
                for (int j = 0; j < moments.Length; j++) moments[j].Add(values[j]);
            }
        Means = [.. moments.Select(m => m.Mean)];
        Deviations = [.. moments.Select(m => m.StandardDeviation > SmallestRelativeDeviation * Math.Abs(m.Mean) ? m.StandardDeviation : 0)];
    }

    public double[] Means { get; }

    /// <summary>Standard deviations, 0 for a column that has the same value in every row.</summary>
    public double[] Deviations { get; }

    /// <summary>Writes the values of the chosen columns with mean 0 and variance 1.</summary>
    public void Standardise(ReadOnlySpan<double> values, ReadOnlySpan<int> columns, Span<double> standardised)
    {
        for (int k = 0; k < columns.Length; k++)
        {
            int j = columns[k];
            standardised[k] = (values[j] - Means[j]) / Deviations[j];
        }
    }
}
