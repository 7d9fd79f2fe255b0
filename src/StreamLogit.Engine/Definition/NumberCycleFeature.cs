namespace StreamLogit.Engine.Definition;

/// <summary>Sine and cosine of a numeric field over a period, as of a compass bearing over 360.</summary>
/// <param name="Field">The path of the field.</param>
/// <param name="Period">The period in the unit of the field.</param>
public sealed record NumberCycleFeature(string Field, double Period) : FeatureOptions
{
    /// <inheritdoc/>
    public override string Name => FormattableString.Invariant($"{Field} of {Period}");

    /// <summary>One for the sine, one for the cosine and one for the absence of the value.</summary>
    public override int DenseCoefficients => 3;
}
