using System.Collections.Immutable;

namespace StreamLogit.Engine.Health;

/// <summary>
/// How long labels that came after their event took, in bins each at most a quarter of its lower end wide. Immutable.
/// </summary>
public sealed class DelayDistribution : IEquatable<DelayDistribution>
{
    internal DelayDistribution(ImmutableArray<DelayBin> bins) => Bins = bins;

    /// <summary>Of no labels.</summary>
    public static DelayDistribution Empty { get; } = new([]);

    /// <summary>The bins that hold labels, from the shortest delays to the longest.</summary>
    public ImmutableArray<DelayBin> Bins { get; }

    /// <summary>The delay in seconds that a share of the labels stay under; NaN without labels. At most a quarter off, interpolated within its bin.</summary>
    public double QuantileSeconds(double share)
    {
        double total = 0;
        foreach (var (_, labels) in Bins) total += labels;
        double wanted = share * total, before = 0;
        foreach (var (seconds, labels) in Bins)
        {
            if (before + labels >= wanted)
            {
                return seconds.Low + (seconds.High - seconds.Low) * Math.Clamp((wanted - before) / labels, 0, 1);
            }
            before += labels;
        }
        return double.NaN;
    }

    /// <summary>Whether both hold the same labels.</summary>
    public bool Equals(DelayDistribution? other) => other is not null && Bins.AsSpan().SequenceEqual(other.Bins.AsSpan());

    /// <inheritdoc/>
    public override bool Equals(object? obj) => Equals(obj as DelayDistribution);

    /// <inheritdoc/>
    public override int GetHashCode() => Bins.Length;
}
