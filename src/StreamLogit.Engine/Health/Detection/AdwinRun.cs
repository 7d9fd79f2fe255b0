namespace StreamLogit.Engine.Health.Detection;

/// <summary>A run of consecutive observations of an adaptive window, kept as its sums.</summary>
internal struct AdwinRun
{
    /// <summary>Their sum.</summary>
    public double Sum;

    /// <summary>The sum of their squared differences from their mean.</summary>
    public double SumOfSquares;

    /// <summary>The stream's clock at the first of them.</summary>
    public long StartMicroseconds;

    /// <summary>How many they are.</summary>
    public long Count;

    /// <summary>The run of both, this one coming first (Chan, Golub &amp; LeVeque 1983).</summary>
    public readonly AdwinRun With(in AdwinRun later)
    {
        if (Count == 0) return later;
        if (later.Count == 0) return this;
        double difference = later.Sum / later.Count - Sum / Count;
        return new AdwinRun
        {
            Sum = Sum + later.Sum,
            SumOfSquares = SumOfSquares + later.SumOfSquares
                + difference * difference * ((double)Count * later.Count / (Count + later.Count)),
            StartMicroseconds = StartMicroseconds,
            Count = Count + later.Count,
        };
    }
}
