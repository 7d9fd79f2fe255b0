namespace StreamLogit.Engine.Health.Metrics;

/// <summary>Labels with neighbouring probabilities, promised against happened: a point of a reliability diagram.</summary>
/// <param name="Weight">The sum of their weights.</param>
/// <param name="Expected">The sum of weight times published probability: the positives that were promised.</param>
/// <param name="Positive">The sum of the weights of the labels that are 1: the positives that came.</param>
/// <param name="EffectiveCount">Their effective number: (sum of weights)^2 / (sum of squared weights).</param>
public readonly record struct CalibrationGroup(double Weight, double Expected, double Positive, double EffectiveCount)
{
    /// <summary>The mean published probability.</summary>
    public double MeanProbability => Expected / Weight;

    /// <summary>The share of labels that are 1.</summary>
    public double ObservedRate => Positive / Weight;

    /// <summary>The 95 % interval of the observed rate (Wilson 1927).</summary>
    public Interval ObservedInterval => WilsonInterval.Of(Math.Clamp(ObservedRate, 0, 1), EffectiveCount);
}
