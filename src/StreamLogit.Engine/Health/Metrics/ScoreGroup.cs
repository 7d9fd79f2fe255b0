namespace StreamLogit.Engine.Health.Metrics;

/// <summary>Labels whose published probabilities are equal, or lie in the same narrow bin of log-odds, taken together.</summary>
/// <param name="LogOdds">Their log-odds; of a bin, those of its mean probability.</param>
/// <param name="Weight">The sum of their weights.</param>
/// <param name="Probability">The sum of weight times published probability.</param>
/// <param name="Positive">The sum of the weights of the labels that are 1.</param>
/// <param name="SquaredWeight">The sum of their squared weights, by which the effective number of labels is told.</param>
/// <param name="Width">How far apart in log-odds two of them can lie; 0 where all are equal, infinite in the bins at the ends.</param>
public readonly record struct ScoreGroup(
    double LogOdds, double Weight, double Probability, double Positive, double SquaredWeight, double Width)
{
    /// <summary>Their mean published probability.</summary>
    public double MeanProbability => Probability / Weight;

    /// <summary>The sum of the weights of the labels that are 0.</summary>
    public double Negative => Weight - Positive;
}
