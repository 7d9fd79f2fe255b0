using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Fitting;

/// <summary>
/// The sum of the rows' log-losses plus l2/2 |w|^2 over the coefficients w, the intercept left free, with its gradient and curvature.
/// In every vector the columns come first and the intercept last. One pass over the rows for each call, chunk by chunk, in one order.
/// </summary>
internal sealed class PenalisedLoss
{
    private readonly SparseChunk[] _chunks;
    private readonly double[][] _curvatures; // of each chunk's rows at the last place evaluated
    private readonly int _columns;
    private readonly double _l2;
    private readonly double[] _logOdds = new double[SparseChunk.MostRows];
    private readonly double[] _signs = new double[SparseChunk.MostRows];
    private readonly double[] _weights = new double[SparseChunk.MostRows];
    private readonly double[] _losses = new double[SparseChunk.MostRows];
    private readonly double[] _slopes = new double[SparseChunk.MostRows];

    public PenalisedLoss(IEnumerable<SparseRows> parts, int columns, double l2)
    {
        _chunks = [.. parts.SelectMany(p => p.Chunks)];
        _curvatures = [.. _chunks.Select(c => new double[Padded(c.Count)])];
        (_columns, _l2) = (columns, l2);
        Gradient = new double[columns + 1];
        CurvatureDiagonal = new double[columns + 1];
        foreach (var chunk in _chunks)
        {
            for (int i = 0; i < chunk.Count; i++)
            {
                if (chunk.Weight(i) > 0) Rows++;
                if (chunk.Labels[i] == 1) Ones += chunk.Weight(i);
                else Zeros += chunk.Weight(i);
            }
        }
    }

    public long Rows { get; }

    /// <summary>The weight of the rows with label 1.</summary>
    public double Ones { get; }

    /// <summary>The weight of the rows with label 0.</summary>
    public double Zeros { get; }

    /// <summary>The log-loss at the share of ones, in nats.</summary>
    public double BaseRateLogLoss => Entropy(Ones) + Entropy(Zeros);

    /// <summary>The loss without the penalty, in nats.</summary>
    public double LogLoss { get; private set; }

    /// <summary>The loss with the penalty.</summary>
    public double Value { get; private set; }

    public double[] Gradient { get; }

    /// <summary>The diagonal of the second derivative.</summary>
    public double[] CurvatureDiagonal { get; }

    /// <summary>Computes everything at these coefficients.</summary>
    public void Evaluate(double[] at)
    {
        var columns = at.AsSpan(0, _columns);
        double squares = 0;
        for (int j = 0; j < _columns; j++)
        {
            squares += at[j] * at[j];
            Gradient[j] = _l2 * at[j];
            CurvatureDiagonal[j] = _l2;
        }
        Gradient[_columns] = CurvatureDiagonal[_columns] = LogLoss = 0;
        for (int c = 0; c < _chunks.Length; c++)
        {
            var chunk = _chunks[c];
            int count = chunk.Count, padded = Padded(count);
            chunk.Multiply(columns, at[_columns], _logOdds);
            for (int i = 0; i < padded; i++)
            {
                _signs[i] = i < count && chunk.Labels[i] == 1 ? -1 : 1;
                _weights[i] = i < count ? chunk.Weight(i) : 0;
            }
            _logOdds.AsSpan(count, padded - count).Clear();
            LossKernel.Run(
                _logOdds.AsSpan(0, padded), _signs, _weights, _losses.AsSpan(0, padded), _slopes.AsSpan(0, padded), _curvatures[c]);
            double loss = 0, slope = 0, curvature = 0;
            for (int i = 0; i < count; i++)
            {
                loss += _losses[i];
                slope += _slopes[i];
                curvature += _curvatures[c][i];
            }
            LogLoss += loss;
            Gradient[_columns] += slope;
            CurvatureDiagonal[_columns] += curvature;
            chunk.AddTransposed(_slopes, Gradient);
            chunk.AddSquares(_curvatures[c], CurvatureDiagonal);
        }
        Value = LogLoss + 0.5 * _l2 * squares;
    }

    /// <summary>The second derivative at the last place evaluated, times a vector.</summary>
    public void CurvatureTimes(double[] vector, double[] product)
    {
        for (int j = 0; j < _columns; j++) product[j] = _l2 * vector[j];
        product[_columns] = 0;
        for (int c = 0; c < _chunks.Length; c++)
        {
            var chunk = _chunks[c];
            var curvatures = _curvatures[c];
            chunk.Multiply(vector.AsSpan(0, _columns), vector[_columns], _logOdds);
            double sum = 0;
            for (int i = 0; i < chunk.Count; i++)
            {
                _logOdds[i] *= curvatures[i];
                sum += _logOdds[i];
            }
            product[_columns] += sum;
            chunk.AddTransposed(_logOdds, product);
        }
    }

    private double Entropy(double weight) => weight == 0 ? 0 : -weight * Elementary.Log(weight / (Ones + Zeros));

    private static int Padded(int count) => (count + 7) & ~7;
}
