namespace StreamLogit.Engine.Health.Detection;

/// <summary>
/// The test of Page and Hinkley (Hinkley, Biometrika 58, 1971, 509) for a rise of the mean above its own past: m = sum of (x - running mean - tolerance);
/// it signals where m exceeds its lowest value so far by more than the threshold.
/// </summary>
/// <param name="tolerance">How far above the running mean an observation may lie without counting.</param>
/// <param name="threshold">How far m may rise above its minimum.</param>
public sealed class PageHinkley(double tolerance, double threshold)
{
    private double _sum;
    private double _lowest;

    /// <summary>Observations since the start or the last reset.</summary>
    public long Count { get; private set; }

    /// <summary>Their mean.</summary>
    public double Mean { get; private set; }

    /// <summary>How far m stands above its minimum.</summary>
    public double Statistic => _sum - _lowest;

    /// <summary>Observations since the minimum: where it signals, the mean began to rise about so many ago.</summary>
    public long SinceMinimum { get; private set; }

    /// <summary>
    /// A test of observations with a known standard deviation that signals once in <paramref name="averageRunLength"/> of them while their mean stays, like
    /// the one-sided CUSUM that it turns into once its running mean has settled.
    /// </summary>
    /// <param name="standardDeviation">The standard deviation of an observation, about normal.</param>
    /// <param name="shift">The rise that is to be found fast, in standard deviations; 1 is usual.</param>
    /// <param name="averageRunLength">From 2 to 1e9 observations.</param>
    public static PageHinkley ForRunLength(double standardDeviation, double shift, double averageRunLength) =>
        new(shift / 2 * standardDeviation, CusumRunLength.DecisionInterval(shift / 2, averageRunLength) * standardDeviation);

    /// <summary>Takes in an observation.</summary>
    /// <returns>Whether it signals.</returns>
    public bool Add(double observation)
    {
        Count++;
        Mean += (observation - Mean) / Count;
        _sum += observation - Mean - tolerance;
        SinceMinimum++;
        if (_sum < _lowest)
        {
            _lowest = _sum;
            SinceMinimum = 0;
        }
        return Statistic > threshold;
    }

    /// <summary>Forgets everything, as after a signal.</summary>
    public void Reset()
    {
        _sum = _lowest = Mean = 0;
        Count = SinceMinimum = 0;
    }
}
