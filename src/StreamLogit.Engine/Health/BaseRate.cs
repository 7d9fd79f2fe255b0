namespace StreamLogit.Engine.Health;

/// <summary>
/// The predictor of Krichevsky and Trofimov (1981), which knows only how often labels were 1 so far: p = (ones + 1/2) / (labels + 1).
/// What a model must beat.
/// </summary>
internal struct BaseRate
{
    public double Ones;
    public double Labels;

    /// <summary>The probability of label 1.</summary>
    public readonly double Probability => (Ones + 0.5) / (Labels + 1);

    public void Learn(int label, double weight)
    {
        Ones += weight * label;
        Labels += weight;
    }
}
