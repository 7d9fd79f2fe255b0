namespace StreamLogit.Engine.Definition;

/// <summary>What a history knows of the events of a key before the one at hand. Decayed: an event counts 2^-(its age / the half-life).</summary>
public enum HistoryKind
{
    /// <summary>The decayed number of events.</summary>
    Count,

    /// <summary>The decayed sum of a numeric field.</summary>
    Sum,

    /// <summary>The decayed mean of a numeric field.</summary>
    Mean,

    /// <summary>How far the event's own value of a numeric field is from the decayed mean, in decayed standard deviations, within ±10.</summary>
    Deviation,

    /// <summary>The seconds since the newest event.</summary>
    Gap,

    /// <summary>The decayed number of different values of a field, each counted from when it was last seen.</summary>
    Distinct,

    /// <summary>1 where the key was not seen with the event's value of a field within some time, else 0.</summary>
    New,

    /// <summary>The decayed share of bad labels among those known by now, shrunk to the share among the labels of all keys.</summary>
    Rate,
}
