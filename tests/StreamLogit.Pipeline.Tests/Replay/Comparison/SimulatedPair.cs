namespace StreamLogit.Pipeline.Tests.Replay.Comparison;

/// <summary>
/// A stream with two forecasters who see the true log-odds through errors of their own: noise that lasts for hours, a part that lasts for the day, and noise
/// from event to event. With equal sizes of error neither is better in the long run, whatever the measure, because they could change places.
/// </summary>
internal sealed class SimulatedPair(int seed, double referenceError, double variantError)
{
    public const long Hour = 3_600_000_000;
    private readonly Random _random = new(seed);
    private double _referenceHours, _variantHours, _referenceDay, _variantDay, _level;

    public delegate void EventTaker(double referenceLogOdds, double variantLogOdds, double trueLogOdds, int label, long timeMicroseconds);

    public void Run(int days, int eventsPerHour, EventTaker take)
    {
        for (long hour = 0; hour < 24L * days; hour++)
        {
            if (hour % 24 == 0) (_referenceDay, _variantDay, _level) = (Gauss(), Gauss(), Gauss());
            _referenceHours = 0.7 * _referenceHours + 0.7 * Gauss();
            _variantHours = 0.7 * _variantHours + 0.7 * Gauss();
            for (int i = 0; i < eventsPerHour; i++)
            {
                double truth = -1.5 + 0.5 * _level + 1.2 * Gauss();
                int label = _random.NextDouble() < 1 / (1 + Math.Exp(-truth)) ? 1 : 0;
                double reference = truth + referenceError * (_referenceHours + _referenceDay + Gauss());
                double variant = truth + variantError * (_variantHours + _variantDay + Gauss());
                take(reference, variant, truth, label, hour * Hour + i * Hour / eventsPerHour);
            }
        }
    }

    public double Gauss() => Math.Sqrt(-2 * Math.Log(1 - _random.NextDouble())) * Math.Cos(2 * Math.PI * _random.NextDouble());
}
