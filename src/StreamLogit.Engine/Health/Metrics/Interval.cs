namespace StreamLogit.Engine.Health.Metrics;

/// <summary>A range of values, both ends included.</summary>
/// <param name="Low">Its lower end.</param>
/// <param name="High">Its upper end.</param>
public readonly record struct Interval(double Low, double High)
{
    /// <summary>No interval: both ends are NaN.</summary>
    public static Interval None { get; } = new(double.NaN, double.NaN);

    /// <summary>From <paramref name="margin"/> below to as much above.</summary>
    public static Interval Around(double middle, double margin) => new(middle - margin, middle + margin);

    /// <summary>What of it lies within the bounds.</summary>
    public Interval Within(double low, double high) => new(Math.Clamp(Low, low, high), Math.Clamp(High, low, high));

    /// <summary>Whether a value lies in it.</summary>
    public bool Contains(double value) => value >= Low && value <= High;
}
