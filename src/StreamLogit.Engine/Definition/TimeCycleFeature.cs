namespace StreamLogit.Engine.Definition;

/// <summary>Sine and cosine of the event's time over a period.</summary>
/// <param name="PeriodMicroseconds">The period in microseconds.</param>
/// <param name="Label">The period as the definition writes it, for names: <c>1d</c>.</param>
public sealed record TimeCycleFeature(long PeriodMicroseconds, string Label) : FeatureOptions
{
    /// <inheritdoc/>
    public override string Name => $"time of {Label}";

    /// <summary>One for the sine and one for the cosine.</summary>
    public override int DenseCoefficients => 2;
}
