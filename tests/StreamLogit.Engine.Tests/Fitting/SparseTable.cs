using StreamLogit.Engine.Features;
using StreamLogit.Engine.Fitting;

namespace StreamLogit.Engine.Tests.Fitting;

/// <summary>Sparse rows as lists, from which the compact ones are made.</summary>
internal sealed class SparseTable
{
    private readonly List<(int[] Slots, double[] Values, int Label, double Weight)> _rows = [];

    public int Count => _rows.Count;

    public void Add(int[] slots, double[] values, int label, double weight = 1) => _rows.Add((slots, values, label, weight));

    public SparseRows Rows(SparseColumns columns, int from = 0, int to = int.MaxValue)
    {
        var rows = new SparseRows(columns);
        foreach (var (slots, values, label, weight) in _rows.Take(to).Skip(from)) rows.Add(new EncodedVector(slots, values), label, weight);
        rows.Trim();
        return rows;
    }

    public delegate void RowTaker(in EncodedVector x, int label);

    public void Each(int from, int to, RowTaker take)
    {
        foreach (var (slots, values, label, _) in _rows.Take(to).Skip(from)) take(new EncodedVector(slots, values), label);
    }

    public SparseFit Fit(double l2 = 1, double toleranceNats = 1e-13)
    {
        var columns = new SparseColumns();
        return PenalisedLikelihood.Fit([Rows(columns)], columns, new PenaltyOptions { L2 = l2, ToleranceNats = toleranceNats });
    }

    /// <summary>The derivative of the objective by the intercept (slot -1) and by every slot, computed the plain way.</summary>
    public Dictionary<int, double> Gradient(SparseFit fit, double l2)
    {
        var gradient = new Dictionary<int, double> { [-1] = 0 };
        foreach (var (slot, coefficient) in fit.Coefficients) gradient[slot] = l2 * coefficient;
        foreach (var (slots, values, label, weight) in _rows.Where(r => r.Weight > 0))
        {
            double residual = weight * (1 / (1 + Math.Exp(-fit.LogOdds(new EncodedVector(slots, values)))) - label);
            gradient[-1] += residual;
            for (int i = 0; i < slots.Length; i++)
                if (values[i] != 0) gradient[slots[i]] += residual * values[i];
        }
        return gradient;
    }

    /// <summary>Rows with a few one-hot categories, a number now and then, and labels from a logistic model.</summary>
    public static SparseTable Random(int seed, int rows, int categories, int values, bool withWeights = false)
    {
        var random = new Random(seed);
        double[] truth = [.. Enumerable.Range(0, categories * values).Select(_ => random.NextDouble() * 2 - 1)];
        var table = new SparseTable();
        for (int i = 0; i < rows; i++)
        {
            // Skewed, so that some values are rare.
            int[] slots = [.. Enumerable.Range(0, categories).Select(c => c * values + (int)(values * Math.Pow(random.NextDouble(), 3))), 1_000_000];
            double number = random.Next(3) == 0 ? 0 : random.NextDouble() * 4 - 1;
            double logOdds = -1 + 0.5 * number + slots.SkipLast(1).Sum(s => truth[s]);
            int label = random.NextDouble() < 1 / (1 + Math.Exp(-logOdds)) ? 1 : 0;
            table.Add(slots, [.. Enumerable.Repeat(1.0, categories), number], label, withWeights ? random.Next(4) : 1);
        }
        return table;
    }
}
