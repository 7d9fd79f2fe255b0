namespace StreamLogit.Engine.Definition;

/// <summary>A numeric field. Where it is missing it contributes 0 and switches on a coefficient of its own.</summary>
/// <param name="Field">The path of the field.</param>
/// <param name="Scale">How its value is scaled.</param>
public sealed record NumberFeature(string Field, NumberScale Scale) : FeatureOptions
{
    /// <inheritdoc/>
    public override string Name => Field;

    /// <summary>One for the value and one for its absence.</summary>
    public override int DenseCoefficients => 2;

    /// <inheritdoc/>
    public override string Identity => $"number {Name} scale {Scale}";
}
