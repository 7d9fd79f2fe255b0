using System.Collections.Immutable;

namespace StreamLogit.Engine.Learning;

/// <summary>What a feature had learned about the scale of its values, on which its coefficient depends.</summary>
/// <param name="Feature">The place of the feature in the definition, from 0 on.</param>
/// <param name="Learned">What it keeps in a state, as bytes.</param>
public sealed record FittedScale(int Feature, ImmutableArray<byte> Learned);
