using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health;

/// <summary>Sums over labels, each weighted by its record's weight. Sums of two runs of labels add up to those of both.</summary>
internal struct LabelSums
{
    public long Count;
    public double Weight;
    public double LogLoss;
    public double BaseRateLogLoss;
    public double Brier;
    public double Probability;
    public double Positive;

    /// <summary>The sums of one label.</summary>
    public static LabelSums Of(double logOdds, double baseRate, int label, double weight)
    {
        var (probability, lossOfOne, lossOfZero) = Elementary.Logistic(logOdds);
        double error = probability - label;
        return new LabelSums
        {
            Count = 1,
            Weight = weight,
            LogLoss = weight * (label == 1 ? lossOfOne : lossOfZero),
            BaseRateLogLoss = weight * BaseRate.LogLoss(baseRate, label),
            Brier = weight * (error * error),
            Probability = weight * probability,
            Positive = weight * label,
        };
    }

    public void Add(in LabelSums other)
    {
        Count += other.Count;
        Weight += other.Weight;
        LogLoss += other.LogLoss;
        BaseRateLogLoss += other.BaseRateLogLoss;
        Brier += other.Brier;
        Probability += other.Probability;
        Positive += other.Positive;
    }

    public void Subtract(in LabelSums other)
    {
        Count -= other.Count;
        Weight -= other.Weight;
        LogLoss -= other.LogLoss;
        BaseRateLogLoss -= other.BaseRateLogLoss;
        Brier -= other.Brier;
        Probability -= other.Probability;
        Positive -= other.Positive;
    }

    public readonly HealthFigures ToFigures() => new(
        Count, Weight, LogLoss / Weight, BaseRateLogLoss / Weight, Brier / Weight, Probability / Weight, Positive / Weight);
}
