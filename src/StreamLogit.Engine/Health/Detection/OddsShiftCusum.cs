using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health.Detection;

/// <summary>
/// A CUSUM of the likelihood ratio "the odds are r times those that were published" against "the published probabilities hold": each label adds its published
/// log-loss less the log-loss of the shifted probability, ln(r^y / (1 - p + r p)), and the sum is never below 0.
/// </summary>
/// <remarks>
/// While the probabilities hold, each step multiplies by e-values of mean 1, so the average run length is at least e^threshold steps, whatever the probabilities
/// are and however rare the labels 1 (the e-detector of Shin, Ramdas &amp; Rinaldo, New England Journal of Statistics in Data Science 2, 2024, 229; for
/// independent likelihood ratios Lorden, Annals of Mathematical Statistics 42, 1971, 1897). A step is a group of labels.
/// </remarks>
internal struct OddsShiftCusum
{
    /// <summary>The sum, 0 or more, in nats.</summary>
    public double Sum;

    /// <summary>The stream's clock when the sum last left 0.</summary>
    public long SinceMicroseconds;

    /// <summary>How many labels had been learned then.</summary>
    public long SinceLabel;

    /// <summary>Takes in a group of labels.</summary>
    /// <param name="logOddsRatio">ln r.</param>
    /// <param name="positives">How many of the labels are 1.</param>
    /// <param name="product">The product of 1 - p + r p over the labels.</param>
    /// <param name="startMicroseconds">The stream's clock at the group's first label.</param>
    /// <param name="startLabel">How many labels had been learned before it.</param>
    public void Add(double logOddsRatio, double positives, double product, long startMicroseconds, long startLabel)
    {
        if (Sum <= 0) (Sum, SinceMicroseconds, SinceLabel) = (0, startMicroseconds, startLabel);
        Sum += positives * logOddsRatio - Elementary.Log(product);
    }
}
