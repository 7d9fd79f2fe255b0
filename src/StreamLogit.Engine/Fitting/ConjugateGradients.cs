namespace StreamLogit.Engine.Fitting;

/// <summary>Solves curvature * step = -gradient by conjugate gradients, preconditioned by the curvature's diagonal.</summary>
internal sealed class ConjugateGradients(int length)
{
    // The residual, against the gradient, at which far from the minimum the step is good enough.
    private const double LooseResidual = 0.1;
    private readonly double[] _residual = new double[length];
    private readonly double[] _scaled = new double[length];
    private readonly double[] _direction = new double[length];
    private readonly double[] _product = new double[length];

    /// <summary>The step found.</summary>
    public double[] Step { get; } = new double[length];

    /// <summary>-gradient * step: twice what the step should gain.</summary>
    public double Decrement { get; private set; }

    /// <summary>Finds the step at the place where the loss was last evaluated.</summary>
    /// <returns>How many times the curvature was multiplied.</returns>
    public int Solve(PenalisedLoss loss, int mostSteps)
    {
        Array.Clear(Step);
        for (int j = 0; j < length; j++)
        {
            _residual[j] = -loss.Gradient[j];
            _direction[j] = _scaled[j] = _residual[j] / loss.CurvatureDiagonal[j];
        }
        double square = Dot(_residual, _scaled);

        // Close to the minimum ever more exactly, which makes the outer steps converge faster than by a constant factor.
        double target = square * Math.Min(LooseResidual * LooseResidual, square);
        int steps = 0;
        while (square > target && steps < mostSteps)
        {
            loss.CurvatureTimes(_direction, _product);
            steps++;
            double along = square / Dot(_direction, _product);
            for (int j = 0; j < length; j++)
            {
                Step[j] += along * _direction[j];
                _residual[j] -= along * _product[j];
                _scaled[j] = _residual[j] / loss.CurvatureDiagonal[j];
            }
            double next = Dot(_residual, _scaled);
            double turn = next / square;
            for (int j = 0; j < length; j++) _direction[j] = _scaled[j] + turn * _direction[j];
            square = next;
        }
        Decrement = -Dot(loss.Gradient, Step);
        return steps;
    }

    private static double Dot(double[] a, double[] b)
    {
        double sum = 0;
        for (int j = 0; j < a.Length; j++) sum += a[j] * b[j];
        return sum;
    }
}
