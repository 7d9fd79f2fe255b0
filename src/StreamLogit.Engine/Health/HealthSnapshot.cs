using System.Collections.Immutable;
using StreamLogit.Engine.Health.Alarms;
using StreamLogit.Engine.Health.Cohorts;
using StreamLogit.Engine.Health.Detection;
using StreamLogit.Engine.Health.Drift;

namespace StreamLogit.Engine.Health;

/// <summary>What is known about the published probabilities at one moment. Immutable; safe to read from any thread.</summary>
public sealed record HealthSnapshot
{
    /// <summary>The stream's clock: the highest time seen, in microseconds since 1970, or null before the first record.</summary>
    public long? ClockMicroseconds { get; init; }

    /// <summary>Records seen, of every kind.</summary>
    public long Records { get; init; }

    /// <summary>Events scored.</summary>
    public long Events { get; init; }

    /// <summary>Labels learned.</summary>
    public long Labelled { get; init; }

    /// <summary>Records rejected.</summary>
    public long Rejected { get; init; }

    /// <summary>Rejects by the code of their reason; reasons that did not occur are left out.</summary>
    public ImmutableSortedDictionary<string, long> RejectsByReason { get; init; } = ImmutableSortedDictionary<string, long>.Empty;

    /// <summary>Events scored whose label is not known yet.</summary>
    public long Awaiting { get; init; }

    /// <summary>Events whose wait ended without a label.</summary>
    public long Expired { get; init; }

    /// <summary>Events that were not kept for their label, so that the kept ones count for several.</summary>
    public long Thinned { get; init; }

    /// <summary>Labels that came again and said the same.</summary>
    public long Repeated { get; init; }

    /// <summary>Labels that said the opposite of an earlier one and were learned as corrections.</summary>
    public long Corrected { get; init; }

    /// <summary>
    /// Labels that stood in their event, without a time at which they became known, and taught at once. Where labels come later in truth, a replay with
    /// any of them is optimistic.
    /// </summary>
    public long TaughtAtOnce { get; init; }

    /// <summary>Labels that came before their event and wait for it.</summary>
    public long Early { get; init; }

    /// <summary>Bytes of memory that the kept events take.</summary>
    public long AwaitingBytes { get; init; }

    /// <summary>Events one of whose categories has its slot from another value.</summary>
    public long CollidedEvents { get; init; }

    /// <summary>How the memory of histories is doing.</summary>
    public HistoryFigures Histories { get; init; } = new(0, 0, 0, 0, 0);

    /// <summary>The figures over all labels.</summary>
    public required HealthFigures Total { get; init; }

    /// <summary>The figures over windows of the stream's clock, and over the last labels.</summary>
    public ImmutableArray<WindowFigures> Windows { get; init; } = [];

    /// <summary>What happened on the stream since its start, besides what labels tell.</summary>
    public StreamFigures Stream { get; init; } = StreamFigures.Of(new StreamSums());

    /// <summary>The figures of the slices: field by field, the most frequent values first, the rest of a field's values behind them.</summary>
    public ImmutableArray<SliceFigures> Slices { get; init; } = [];

    /// <summary>How the figures went over time.</summary>
    public HealthHistory History { get; init; } = HealthHistory.Empty;

    /// <summary>How events did by the time at which they were scored, and how many of them have their label by their age.</summary>
    public CohortFigures Cohorts { get; init; } = CohortFigures.Empty;

    /// <summary>The period that drift is measured against; null before the first event.</summary>
    public ReferenceFigures? Reference { get; init; }

    /// <summary>How the change detectors stand.</summary>
    public ImmutableArray<DetectorFigures> Detectors { get; init; } = [];

    /// <summary>The changes that they found last, the latest first, at most 64.</summary>
    public ImmutableArray<DetectedChange> Changes { get; init; } = [];

    /// <summary>How the alarms stand, in the definition's order.</summary>
    public ImmutableArray<AlarmFigures> Alarms { get; init; } = [];

    /// <summary>When alarms were raised and fell quiet, the latest first, at most 100.</summary>
    public ImmutableArray<AlarmChange> AlarmChanges { get; init; } = [];

    /// <summary>The figures of every setting of the bank, in its order.</summary>
    public ImmutableArray<SettingFigures> Settings { get; init; } = [];
}
