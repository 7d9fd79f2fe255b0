using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health;

/// <summary>
/// The predictor of Krichevsky and Trofimov (1981), which knows only how often labels were 1 so far: p = (ones + 1/2) / (labels + 1).
/// What a model must beat.
/// </summary>
internal struct BaseRate
{
    public double Ones;
    public double Labels;

    /// <summary>-ln of the probability that it gave to this label, in nats; then it learns the label.</summary>
    public double LogLossThenLearn(int label, double weight)
    {
        double favourable = label == 1 ? Ones : Labels - Ones;
        double loss = -Elementary.Log((favourable + 0.5) / (Labels + 1));
        Ones += weight * label;
        Labels += weight;
        return loss;
    }
}
