using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>A categorical field, or the crossing of several: one coefficient for every (combination of) value(s), hashed into the slots.</summary>
/// <param name="Fields">The paths of the fields, at least one.</param>
public sealed record CategoryFeature(ImmutableArray<string> Fields) : FeatureOptions
{
    /// <inheritdoc/>
    public override string Name => string.Join(" & ", Fields);

    /// <summary>None.</summary>
    public override int DenseCoefficients => 0;
}
