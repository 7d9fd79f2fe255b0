using System.Collections.Immutable;

namespace StreamLogit.Engine.Health.Drift;

/// <summary>
/// How the features of a window's events compare with those of the reference period. Counted over every n-th event, so that an hour gives about 128 to 256.
/// Immutable; the comparison is made when it is first read.
/// </summary>
public sealed class DriftFigures
{
    private readonly Lazy<ImmutableArray<FeatureDrift>> _features;

    internal DriftFigures(ImmutableArray<DriftProbe> probes, DriftCounts reference, DriftCounts window, bool isReferenceComplete)
    {
        Events = (long)window.Numbers[DriftCounts.Weight];
        EffectiveCount = window.EffectiveCount;
        _features = new Lazy<ImmutableArray<FeatureDrift>>(
            () => DriftComparison.Of(probes, reference, window, isReferenceComplete), LazyThreadSafetyMode.PublicationOnly);
    }

    /// <summary>About how many events the window has, which starts at a full hour: the thinned ones counted as many times as they stand for.</summary>
    public long Events { get; }

    /// <summary>The number of events that tell as much as the thinned ones that were counted.</summary>
    public double EffectiveCount { get; }

    /// <summary>Every feature and the published log-odds, ranked by how far they moved beyond what chance gives.</summary>
    public ImmutableArray<FeatureDrift> Features => _features.Value;
}
