using System.Collections.Immutable;
using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>What a backtest gave.</summary>
public sealed record BacktestResult
{
    /// <summary>The definition as it stands.</summary>
    public required LaneResult Reference { get; init; }

    /// <summary>What was tried, in its order.</summary>
    public required ImmutableArray<LaneResult> Variants { get; init; }

    /// <summary>The variants against the reference, in the same order.</summary>
    public required ComparisonResult Comparison { get; init; }

    /// <summary>What else could have been used.</summary>
    public required ImmutableArray<BaselineResult> Baselines { get; init; }

    /// <summary>Labels of the reference that a variant did not learn at the same record, so that they are not compared.</summary>
    public required long LabelsLeftOut { get; init; }

    /// <summary>The only records that were taken, or null for all.</summary>
    public required RecordSpan? Span { get; init; }

    /// <summary>How long after its event, in microseconds, a label that stood in the event was known, where the event did not tell it; 0 for at once.</summary>
    public required long LabelDelayMicroseconds { get; init; }

    /// <summary>Events whose rival field held no number from 0 to 1.</summary>
    public required long RivalUnusable { get; init; }

    /// <summary>Passes over the recordings.</summary>
    public required int Passes { get; init; }

    /// <summary>Whether the recordings were replayed to their end.</summary>
    public required bool IsComplete { get; init; }

    /// <summary>The recordings.</summary>
    public required ImmutableArray<RecordingIdentity> Recordings { get; init; }
}
