namespace StreamLogit.Engine.Numerics;

/// <summary>
/// Mean and variance of the values seen so far, updated with each (Welford, Technometrics 4, 1962, 419). Plain data, so that it can be saved.
/// </summary>
internal struct RunningMoments
{
    /// <summary>Values seen.</summary>
    public long Count;

    /// <summary>Their mean, 0 before the first.</summary>
    public double Mean;

    /// <summary>The sum of their squared differences from the mean.</summary>
    public double SumOfSquares;

    /// <summary>The sample variance, with the divisor n - 1; 0 before the second value.</summary>
    public readonly double Variance => Count > 1 ? SumOfSquares / (Count - 1) : 0;

    /// <summary>The square root of <see cref="Variance"/>.</summary>
    public readonly double StandardDeviation => Math.Sqrt(Variance);

    /// <summary>Takes in a value.</summary>
    public void Add(double value)
    {
        Count++;
        double difference = value - Mean;
        Mean += difference / Count;
        SumOfSquares += difference * (value - Mean);
    }
}
