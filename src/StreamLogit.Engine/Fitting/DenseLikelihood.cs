using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;
using MathNet.Numerics.LinearAlgebra.Factorization;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Fitting;

/// <summary>The binomial log-likelihood of dense rows at some coefficients, with its gradient and information matrix, in standardised units.</summary>
internal sealed class DenseLikelihood
{
    private readonly DenseRows _rows;
    private readonly ColumnScales _scales;
    private readonly int[] _columns;
    private readonly double _saturated;
    private readonly double[] _gradient;
    private readonly double[] _chunkGradient;
    private readonly double[] _information; // the lower triangle, row after row
    private readonly double[] _chunkInformation;
    private readonly double[] _row;

    public DenseLikelihood(DenseRows rows, ColumnScales scales, int[] columns)
    {
        (_rows, _scales, _columns) = (rows, scales, columns);
        int count = columns.Length + 1;
        _gradient = new double[count];
        _chunkGradient = new double[count];
        _information = new double[count * (count + 1) / 2];
        _chunkInformation = new double[_information.Length];
        _row = new double[count];
        _row[0] = 1;
        foreach (var chunk in rows.Chunks)
            for (int i = 0; i < chunk.Count; i++)
                _saturated += chunk.Weights[i] * (TimesItsLog(chunk.Labels[i]) + TimesItsLog(1 - chunk.Labels[i]));
    }

    /// <summary>The deviance at the last coefficients evaluated, in nats.</summary>
    public double Deviance { get; private set; }

    /// <summary>Computes everything at these coefficients: the intercept, then the columns.</summary>
    public void Evaluate(ReadOnlySpan<double> at)
    {
        double loss = 0;
        Array.Clear(_gradient);
        Array.Clear(_information);
        foreach (var chunk in _rows.Chunks)
        {
            // Sums over a chunk are added to those of the chunks before, which keeps the rounding error small over many rows.
            Array.Clear(_chunkGradient);
            Array.Clear(_chunkInformation);
            double chunkLoss = 0;
            for (int i = 0; i < chunk.Count; i++)
            {
                _scales.Standardise(chunk.Row(i), _columns, _row.AsSpan(1));
                chunkLoss += AddRow(at, chunk.Labels[i], chunk.Weights[i]);
            }
            loss += chunkLoss;
            for (int k = 0; k < _gradient.Length; k++) _gradient[k] += _chunkGradient[k];
            for (int k = 0; k < _information.Length; k++) _information[k] += _chunkInformation[k];
        }
        Deviance = Math.Max(0, 2 * (loss + _saturated));
    }

    /// <summary>The step to the maximum of the quadratic approximation at the last coefficients evaluated.</summary>
    /// <param name="decrement">Its squared length in standard errors; half of it is what the step should gain, in nats.</param>
    /// <returns>The step, or null where the information matrix is singular in double precision.</returns>
    public double[]? NewtonStep(out double decrement)
    {
        decrement = double.NaN;
        var scale = Scale();
        if (Factor(scale) is not { } factor) return null;
        var gradient = Vector<double>.Build.DenseOfArray(_gradient);
        var step = factor.Solve(gradient.PointwiseMultiply(scale)).PointwiseMultiply(scale);
        decrement = step.DotProduct(gradient);
        return step.ToArray();
    }

    /// <summary>The inverse of the information matrix at the last coefficients evaluated, or null where it is singular in double precision.</summary>
    public Matrix<double>? Covariance()
    {
        var scale = Scale();
        return Factor(scale)?.Solve(DenseMatrix.CreateIdentity(scale.Count)).MapIndexed((i, j, value) => value * scale[i] * scale[j]);
    }

    private double AddRow(ReadOnlySpan<double> at, double label, double weight)
    {
        double logOdds = 0;
        for (int k = 0; k < _row.Length; k++) logOdds += at[k] * _row[k];
        double e = Elementary.Exp(-Math.Abs(logOdds));
        double likely = 1 / (1 + e), unlikely = e / (1 + e);
        double probability = logOdds >= 0 ? likely : unlikely;

        // y - p without cancellation where p is near the label.
        double missing = label == 1 ? (logOdds >= 0 ? unlikely : likely) : label - probability;
        double curvature = weight * likely * unlikely;
        int place = 0;
        for (int k = 0; k < _row.Length; k++)
        {
            _chunkGradient[k] += weight * missing * _row[k];
            double product = curvature * _row[k];
            for (int m = 0; m <= k; m++) _chunkInformation[place++] += product * _row[m];
        }
        double softplus = Math.Max(0, logOdds) + Elementary.Log1p(e);
        return weight * (softplus - label * logOdds);
    }

    private DenseVector Scale()
    {
        var scale = new DenseVector(_row.Length);
        for (int k = 0, place = 0; k < scale.Count; place += ++k + 1) scale[k] = 1 / Math.Sqrt(_information[place]);
        return scale;
    }

    // With ones on the diagonal: the weights of some rows may be many orders below those of others.
    private Cholesky<double>? Factor(DenseVector scale)
    {
        var matrix = new DenseMatrix(scale.Count);
        int place = 0;
        for (int k = 0; k < scale.Count; k++)
            for (int m = 0; m <= k; m++)
                matrix[k, m] = matrix[m, k] = _information[place++] * scale[k] * scale[m];
        try
        {
            return matrix.Cholesky();
        }
        catch (ArgumentException)
        {
            return null; // the only way in which the library says that a matrix is not positive definite
        }
    }

    private static double TimesItsLog(double x) => x > 0 ? x * Elementary.Log(x) : 0;
}
