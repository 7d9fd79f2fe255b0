namespace StreamLogit.Engine.Numerics;

/// <summary>Elementary functions of single values, with the same bits on every machine. At most 2 units in the last place off.</summary>
internal static class Elementary
{
    /// <summary>ln 2.</summary>
    public const double Ln2 = 0.693147180559945309;

    /// <summary>e^x.</summary>
    public static double Exp(double x) => LaneMath.Exp(new Lanes1(x)).Value;

    /// <summary>ln x: -infinity for 0, NaN below 0.</summary>
    public static double Log(double x) => LaneMath.Log(new Lanes1(x)).Value;

    /// <summary>ln(1 + x): -infinity for -1, NaN below -1.</summary>
    public static double Log1p(double x) => LaneMath.Log1p(new Lanes1(x)).Value;

    /// <summary>1 / (1 + e^-x).</summary>
    public static double Sigmoid(double x) => LaneMath.Sigmoid(new Lanes1(x)).Value;

    /// <summary>The probability 1 / (1 + e^-x) of log-odds x, and their log-losses ln(1 + e^-x) for label 1 and ln(1 + e^x) for label 0, at the cost of one exp.</summary>
    public static (double Probability, double LossOfOne, double LossOfZero) Logistic(double x)
    {
        var logOdds = new Lanes1(x);
        var exp = LaneMath.Exp(new Lanes1(-Math.Abs(x)));
        double unit = LaneMath.Log1pOfUnit(exp).Value;
        return (LaneMath.SigmoidOf(logOdds, exp).Value, Math.Max(-x, 0) + unit, Math.Max(x, 0) + unit);
    }

    /// <summary>ln(1 + e^x), the log-loss of a score whose log-odds against what happened are x.</summary>
    public static double Softplus(double x) => LaneMath.SoftplusOf(new Lanes1(x), LaneMath.ExpOfMinusAbs(new Lanes1(x))).Value;

    /// <summary>Sine and cosine of an angle that is given as a part of the full turn, 0 to 1. The error is below 4e-16.</summary>
    public static void SinCosOfTurn(double turns, out double sin, out double cos)
    {
        // The nearest quarter turn is taken off, exactly; what stays is at most an eighth, an angle of at most pi/4.
        double quarters = Math.Floor(4 * turns + 0.5);
        double angle = (turns - 0.25 * quarters) * (2 * Math.PI);
        double square = angle * angle;

        // Taylor series; the first terms left out are angle^19/19! and angle^18/18!, below 2^-58.
        double sine = angle + angle * square * (-1.0 / 6 + square * (1.0 / 120 + square * (-1.0 / 5040 + square * (1.0 / 362880
            + square * (-1.0 / 39916800 + square * (1.0 / 6227020800 + square * (-1.0 / 1307674368000 + square * (1.0 / 355687428096000))))))));
        double cosine = 1 - square * (0.5 - square * (1.0 / 24 - square * (1.0 / 720 - square * (1.0 / 40320 - square * (1.0 / 3628800
            - square * (1.0 / 479001600 - square * (1.0 / 87178291200 - square * (1.0 / 20922789888000))))))));

        (sin, cos) = ((int)quarters & 3) switch
        {
            0 => (sine, cosine),
            1 => (cosine, -sine),
            2 => (-sine, -cosine),
            _ => (-cosine, sine),
        };
    }
}
