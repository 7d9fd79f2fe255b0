using MathNet.Numerics.Distributions;

namespace StreamLogit.Pipeline.Scenarios;

/// <summary>Arrivals of a Poisson process whose rate follows the hour of the day and the day of the week.</summary>
internal sealed class ArrivalTimes
{
    private readonly Random _random;
    private readonly double[] _ratePerMillisecond = new double[7 * 24];
    private double _sinceStart;

    /// <param name="random">The source of chance.</param>
    /// <param name="perDay">Arrivals on an average day.</param>
    /// <param name="hours">The relative rates of the hours of a day, 24 of them.</param>
    /// <param name="days">The relative rates of the days of a week from Monday, 7 of them.</param>
    public ArrivalTimes(Random random, double perDay, ReadOnlySpan<double> hours, ReadOnlySpan<double> days)
    {
        _random = random;
        double sum = 0;
        foreach (double day in days)
            foreach (double hour in hours) sum += day * hour;
        for (int i = 0; i < _ratePerMillisecond.Length; i++)
            _ratePerMillisecond[i] = perDay * 7 * days[i / 24] * hours[i % 24] / sum / ScenarioCalendar.MillisecondsPerHour;
    }

    /// <summary>The time of the next arrival, in milliseconds since 1970.</summary>
    public long Next()
    {
        // An exponential amount of rate is used up hour by hour.
        double left = Exponential.Sample(_random, 1);
        while (true)
        {
            long hour = (long)(_sinceStart / ScenarioCalendar.MillisecondsPerHour);
            double rate = _ratePerMillisecond[hour % _ratePerMillisecond.Length];
            double hourEnd = (hour + 1) * (double)ScenarioCalendar.MillisecondsPerHour;
            double available = (hourEnd - _sinceStart) * rate;
            if (left < available)
            {
                _sinceStart += left / rate;
                return ScenarioCalendar.Start + (long)_sinceStart;
            }
            left -= available;
            _sinceStart = hourEnd;
        }
    }
}
