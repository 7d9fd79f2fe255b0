namespace StreamLogit.Engine.Tests.Learning;

/// <summary>The update rules once more, straight from the papers, for one setting and dense events; the last coefficient is the intercept.</summary>
internal static class PlainRules
{
    public delegate double LogOddsThenLearn(double[] x, int y, double weight, double elapsedMicroseconds);

    public static double Sigmoid(double z) => 1 / (1 + Math.Exp(-z));

    public static double Dot(double[] a, double[] b) => a.Zip(b, (u, v) => u * v).Sum();

    public static double[] WithOne(double[] x) => [.. x, 1];

    /// <summary>The pull of the coefficients, but not of the intercept, over some time.</summary>
    public static void Forget(double[] w, double elapsed, double halfLife)
    {
        for (int j = 0; j + 1 < w.Length && halfLife > 0; j++) w[j] *= Math.Pow(2, -elapsed / halfLife);
    }

    public static LogOddsThenLearn Sgd(double[] w, double step, double stepDecay, double weightDecay, double halfLife)
    {
        int k = 0;
        return (features, y, s, elapsed) =>
        {
            double[] x = WithOne(features);
            double z = Dot(w, x), eta = step / Math.Pow(++k, stepDecay);
            Forget(w, elapsed, halfLife);
            for (int j = 0; j + 1 < w.Length; j++) w[j] *= Math.Max(0, 1 - eta * weightDecay);
            for (int j = 0; j < w.Length; j++) w[j] += eta * s * (y - Sigmoid(z)) * x[j];
            return z;
        };
    }

    /// <summary>
    /// Karampatziakis &amp; Langford 2011, table 1, logistic loss: the margin m moves to where m + e^m has grown by step * weight * x'x, found by bisection.
    /// </summary>
    public static LogOddsThenLearn OvershootProofSgd(double[] w, double step)
    {
        return (features, y, s, _) =>
        {
            double[] x = WithOne(features);
            double z = Dot(w, x), square = Dot(x, x), margin = y == 1 ? z : -z, low = 0, high = step * s * square;
            for (int i = 0; i < 200; i++)
            {
                double middle = (low + high) / 2;
                if (middle + Math.Exp(margin) * (Math.Exp(middle) - 1) < step * s * square) low = middle;
                else high = middle;
            }
            for (int j = 0; j < w.Length; j++) w[j] += (y == 1 ? low : -low) / square * x[j];
            return z;
        };
    }

    /// <summary>Duchi, Hazan &amp; Singer 2011, figure 1 with diagonal matrices and delta 1e-8.</summary>
    public static LogOddsThenLearn Adagrad(double[] w, double step, double sumHalfLife, double halfLife)
    {
        double[] sums = new double[w.Length];
        double rho = sumHalfLife == 0 ? 1 : Math.Pow(2, -1 / sumHalfLife);
        return (features, y, s, elapsed) =>
        {
            double[] x = WithOne(features);
            double z = Dot(w, x);
            Forget(w, elapsed, halfLife);
            for (int j = 0; j < w.Length; j++)
            {
                double g = s * (Sigmoid(z) - y) * x[j];
                sums[j] = rho * sums[j] + g * g;
                w[j] -= step * g / (1e-8 + Math.Sqrt(sums[j]));
            }
            return z;
        };
    }

    /// <summary>McMahan et al. 2013, algorithm 1; no penalty on the intercept.</summary>
    public static LogOddsThenLearn Ftrl(double[] w, double alpha, double beta, double l1, double l2, double halfLife = 0)
    {
        double[] z = new double[w.Length], n = new double[w.Length];
        return (features, y, s, elapsed) =>
        {
            double[] x = WithOne(features);
            double logOdds = Dot(w, x);
            for (int j = 0; j < w.Length; j++)
            {
                double first = j + 1 < w.Length ? l1 : 0, second = j + 1 < w.Length ? l2 : 0;
                if (w[j] != 0 && j + 1 < w.Length && halfLife > 0)
                {
                    w[j] *= Math.Pow(2, -elapsed / halfLife);
                    z[j] = -Math.Sign(w[j]) * first - w[j] * ((beta + Math.Sqrt(n[j])) / alpha + second);
                }
                double g = s * (Sigmoid(logOdds) - y) * x[j];
                z[j] += g - (Math.Sqrt(n[j] + g * g) - Math.Sqrt(n[j])) / alpha * w[j];
                n[j] += g * g;
                w[j] = Math.Abs(z[j]) <= first ? 0 : -(z[j] - Math.Sign(z[j]) * first) / ((beta + Math.Sqrt(n[j])) / alpha + second);
            }
            return logOdds;
        };
    }

    /// <summary>
    /// Spiegelhalter &amp; Lauritzen 1990: the normal approximation at the mode, by the full covariance and bisection; MacKay 1992, (31): the
    /// moderated output.
    /// </summary>
    public static LogOddsThenLearn Newton(double[] mean, double forgetting, double priorVariance, double halfLife = 0)
    {
        int d = mean.Length;
        double[][] p = [.. Enumerable.Range(0, d).Select(i => Enumerable.Range(0, d).Select(j => i == j ? priorVariance : 0).ToArray())];
        return (features, y, s, elapsed) =>
        {
            double[] x = WithOne(features);
            double z = Dot(mean, x), scored = z / Math.Sqrt(1 + Math.PI / 8 * Dot(x, [.. p.Select(row => Dot(row, x))]));

            double pull = halfLife > 0 ? Math.Pow(2, -elapsed / halfLife) : 1;
            Forget(mean, elapsed, halfLife);
            z = Dot(mean, x);
            if (forgetting * pull < 1) Inflate(p, 1 / (forgetting * pull * pull), priorVariance);
            double[] px = [.. p.Select(row => Dot(row, x))];
            double v = Dot(x, px), low = -1e3, high = 1e3;
            for (int i = 0; i < 200; i++)
            {
                double middle = (low + high) / 2;
                if (z + v * s * (y - Sigmoid(middle)) > middle) low = middle;
                else high = middle;
            }
            double probability = Sigmoid(low), h = s * probability * (1 - probability);
            for (int i = 0; i < d; i++)
            {
                mean[i] += px[i] * s * (y - probability);
                for (int j = 0; j < d; j++) p[i][j] -= px[i] * px[j] * h / (1 + h * v);
            }
            return scored;
        };
    }

    /// <summary>Factors P = U D U', multiplies D, but not beyond the prior variance, and puts P together again.</summary>
    private static void Inflate(double[][] p, double factor, double most)
    {
        int d = p.Length;
        double[,] u = new double[d, d];
        double[] variance = new double[d];
        for (int j = d - 1; j >= 0; j--)
        {
            variance[j] = p[j][j];
            for (int i = 0; i <= j; i++) u[i, j] = p[i][j] / variance[j];
            for (int i = 0; i <= j; i++) for (int k = 0; k <= j; k++) p[i][k] -= u[i, j] * u[k, j] * variance[j];
        }
        for (int i = 0; i < d; i++)
            for (int k = 0; k < d; k++)
                p[i][k] = Enumerable.Range(Math.Max(i, k), d - Math.Max(i, k)).Sum(j => u[i, j] * u[k, j] * Math.Min(most, factor * variance[j]));
    }
}
