namespace StreamLogit.Engine.Health.Detection;

/// <summary>A few labels in a row, as the detectors take them in. Plain data, so that it can be saved.</summary>
internal struct LabelGroup
{
    /// <summary>How many labels a full group has. A power of two: the adaptive window takes it as one run.</summary>
    public const int Size = 32;

    public double Positives;

    /// <summary>The stream's clock at the first label.</summary>
    public long StartMicroseconds;

    /// <summary>The product over labels of 1 - p + 2p.</summary>
    public double HigherProduct;

    /// <summary>The product over labels of 1 - p + p/2.</summary>
    public double LowerProduct;

    /// <summary>The sum of the published probabilities.</summary>
    public double Probability;

    /// <summary>The sum of the log-losses, each cut at <see cref="ChangeDetectors.LargestLogLoss"/>.</summary>
    public double LogLoss;

    /// <summary>The sum of their squares.</summary>
    public double SquaredLogLoss;

    public int Count;

    /// <summary>Takes in a run of labels.</summary>
    public void Add(ReadOnlySpan<double> probabilities, ReadOnlySpan<double> logLosses, ReadOnlySpan<double> labels)
    {
        var (positives, probability, higher, lower) = (Positives, Probability, HigherProduct, LowerProduct);
        var (logLoss, squared) = (LogLoss, SquaredLogLoss);
        for (int i = 0; i < labels.Length; i++)
        {
            double p = probabilities[i], loss = Math.Min(logLosses[i], ChangeDetectors.LargestLogLoss);
            positives += labels[i];
            probability += p;
            higher *= 1 + p;
            lower *= 1 - 0.5 * p;
            logLoss += loss;
            squared += loss * loss;
        }
        (Positives, Probability, HigherProduct, LowerProduct) = (positives, probability, higher, lower);
        (LogLoss, SquaredLogLoss, Count) = (logLoss, squared, Count + labels.Length);
    }
}
