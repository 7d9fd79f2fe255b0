using System.Collections.Immutable;

namespace StreamLogit.Engine.Health;

/// <summary>What happened on the stream over some time, besides what labels tell.</summary>
/// <param name="Events">Events scored.</param>
/// <param name="Alerts">Events whose decision was <c>alert</c>.</param>
/// <param name="Promised">The sum over events of their published probability, labelled or not.</param>
/// <param name="Rejects">Records rejected.</param>
/// <param name="Expired">Events whose wait ended without a label.</param>
/// <param name="LateLabels">Labels that came after their event.</param>
/// <param name="MeanDelaySeconds">Their mean delay; NaN without any.</param>
/// <param name="Corrections">Labels that were replaced by their opposite.</param>
public sealed record StreamFigures(
    long Events, long Alerts, double Promised, long Rejects, long Expired, long LateLabels, double MeanDelaySeconds, long Corrections)
{
    /// <summary>The share of events that are alerts.</summary>
    public double AlertRate => (double)Alerts / Events;

    /// <summary>The share of events and rejects that are rejects.</summary>
    public double RejectShare => (double)Rejects / (Rejects + Events);

    /// <summary>How long labels took. Empty in points of a history.</summary>
    public DelayDistribution LabelDelays { get; init; } = DelayDistribution.Empty;

    /// <summary>Rejects by the code of their reason; reasons that did not occur are left out. Empty in points of a history.</summary>
    public ImmutableSortedDictionary<string, long> RejectsByReason { get; init; } = ImmutableSortedDictionary<string, long>.Empty;

    internal static StreamFigures Of(in StreamSums sums) => new(
        (long)sums.Events, (long)sums.Alerts, sums.Probability, (long)sums.Rejects, (long)sums.Expired, (long)sums.LateLabels,
        sums.DelaySeconds / sums.LateLabels, (long)sums.Corrections);

    /// <summary>Whether all is equal.</summary>
    public bool Equals(StreamFigures? other) =>
        other is not null && Events == other.Events && Alerts == other.Alerts && Promised.Equals(other.Promised) && Rejects == other.Rejects
        && Expired == other.Expired && LateLabels == other.LateLabels && MeanDelaySeconds.Equals(other.MeanDelaySeconds)
        && Corrections == other.Corrections && LabelDelays.Equals(other.LabelDelays) && RejectsByReason.SequenceEqual(other.RejectsByReason);

    /// <inheritdoc/>
    public override int GetHashCode() => Events.GetHashCode();
}
