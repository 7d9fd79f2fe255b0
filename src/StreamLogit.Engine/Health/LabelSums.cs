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

    public readonly HealthFigures ToFigures() => new(
        Count, Weight, LogLoss / Weight, BaseRateLogLoss / Weight, Brier / Weight, Probability / Weight, Positive / Weight);
}
