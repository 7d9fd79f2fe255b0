using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Health;

/// <summary>What the published probabilities promised of some labels, and what came.</summary>
/// <param name="Expected">The sum of weight times probability: the labels 1 that were promised.</param>
/// <param name="Variance">The sum of squared weight times p(1 - p): the variance that the probabilities promise of the number that comes.</param>
/// <param name="Came">The sum of the weights of the labels that are 1.</param>
public readonly record struct PromisedPositives(double Expected, double Variance, double Came)
{
    /// <summary>Came over promised: 1 where the probabilities hold, above 1 where they promised too little.</summary>
    public double ObservedToExpected => Came / Expected;

    /// <summary>Where the number that comes lies with 80 % where the probabilities hold, by the normal distribution.</summary>
    public Interval Range80 => Range(NormalQuantiles.TwoSided80);

    /// <summary>Where the number that comes lies with 95 % where the probabilities hold, by the normal distribution.</summary>
    public Interval Range95 => Range(NormalQuantiles.TwoSided95);

    private Interval Range(double z)
    {
        double margin = z * Math.Sqrt(Variance);
        return new Interval(Math.Max(Expected - margin, 0), Expected + margin);
    }
}
