using MathNet.Numerics;
using MathNet.Numerics.Integration;

namespace StreamLogit.Engine.Health.Detection;

/// <summary>
/// The average run length of a CUSUM of independent normal observations of variance 1 that starts at 0: how many come on average before it signals.
/// Solves the integral equation of Page (1954) by Gauss-Legendre quadrature; relative error below 1e-8 for k &gt;= 0.25 and h &lt;= 10.
/// </summary>
public static class CusumRunLength
{
    private const int Nodes = 96;
    private static readonly GaussLegendreRule Rule = new(0, 1, Nodes);

    /// <summary>The average run length of one side.</summary>
    /// <param name="k">The allowance in standard deviations.</param>
    /// <param name="h">The decision interval in standard deviations, above 0.</param>
    /// <param name="mean">The mean of the observations, in standard deviations above the target. 0 while nothing is wrong.</param>
    public static double OneSided(double k, double h, double mean = 0)
    {
        // L(u) = 1 + L(0) Phi(k - mean - u) + integral over x from 0 to h of L(x) phi(x + k - mean - u), at the nodes and at u = 0.
        var matrix = new double[Nodes + 1, Nodes + 1];
        var right = new double[Nodes + 1];
        double shift = k - mean;
        for (int row = 0; row <= Nodes; row++)
        {
            double u = row == 0 ? 0 : h * Rule.GetAbscissa(row - 1);
            right[row] = 1;
            matrix[row, row] = 1;
            matrix[row, 0] -= LowerTail(shift - u);
            for (int column = 1; column <= Nodes; column++)
                matrix[row, column] -= h * Rule.GetWeight(column - 1) * Density(h * Rule.GetAbscissa(column - 1) + shift - u);
        }
        return SolveForFirst(matrix, right);
    }

    /// <summary>The average run length of both sides together: their rates add up.</summary>
    public static double TwoSided(double k, double h, double mean = 0) => 1 / (1 / OneSided(k, h, mean) + 1 / OneSided(k, h, -mean));

    /// <summary>The decision interval at which one side signals once in <paramref name="averageRunLength"/> observations while nothing is wrong.</summary>
    /// <param name="k">The allowance in standard deviations.</param>
    /// <param name="averageRunLength">From 2 to 1e9.</param>
    public static double DecisionInterval(double k, double averageRunLength)
    {
        double low = 1e-6, high = 1;
        while (OneSided(k, high) < averageRunLength) high *= 2;
        for (int i = 0; i < 60 && high - low > 1e-10 * high; i++)
        {
            double middle = (low + high) / 2;
            if (OneSided(k, middle) < averageRunLength) low = middle;
            else high = middle;
        }
        return high;
    }

    private static double LowerTail(double x) => SpecialFunctions.Erfc(-x / Math.Sqrt(2)) / 2;

    private static double Density(double x) => Numerics.Elementary.Exp(-x * x / 2) / Math.Sqrt(2 * Math.PI);

    /// <summary>Gaussian elimination with the largest pivot of each column; gives the first unknown.</summary>
    private static double SolveForFirst(double[,] matrix, double[] right)
    {
        int size = right.Length;
        // From the last unknown to the first, so that the first is solved without substituting back.
        for (int column = size - 1; column > 0; column--)
        {
            int pivot = column;
            for (int row = 0; row < column; row++)
                if (Math.Abs(matrix[row, column]) > Math.Abs(matrix[pivot, column])) pivot = row;
            if (pivot != column)
            {
                for (int j = 0; j <= column; j++) (matrix[pivot, j], matrix[column, j]) = (matrix[column, j], matrix[pivot, j]);
                (right[pivot], right[column]) = (right[column], right[pivot]);
            }
            for (int row = 0; row < column; row++)
            {
                double factor = matrix[row, column] / matrix[column, column];
                if (factor == 0) continue;
                for (int j = 0; j < column; j++) matrix[row, j] -= factor * matrix[column, j];
                right[row] -= factor * right[column];
            }
        }
        return right[0] / matrix[0, 0];
    }
}
