using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>
/// A numeric field cut into buckets, each with a coefficient of its own: at given edges, or at the running quantiles of the events before. A missing
/// number is a bucket of its own.
/// </summary>
/// <param name="Field">The path of the field.</param>
public sealed record BucketFeature(string Field) : FeatureOptions
{
    /// <summary>The edges, rising; a number at an edge belongs to the bucket above it. Empty for quantiles.</summary>
    public ImmutableArray<double> Edges { get; init; } = [];

    /// <summary>Into how many buckets of equally many events it is cut, at least 2; 0 for edges.</summary>
    public int Quantiles { get; init; }

    /// <inheritdoc/>
    public override string Name => Edges.IsEmpty ? FormattableString.Invariant($"{Field} in {Quantiles} quantiles") : FormattableString.Invariant($"{Field} in {Edges.Length + 1} buckets");

    /// <summary>One for every bucket and one for a missing number.</summary>
    public override int DenseCoefficients => (Edges.IsEmpty ? Quantiles : Edges.Length + 1) + 1;

    /// <inheritdoc/>
    public override string Identity => $"{base.Identity} {string.Join(' ', Edges.Select(edge => edge.ToString("R", System.Globalization.CultureInfo.InvariantCulture)))}";
}
