namespace StreamLogit.Engine.Health.Drift;

/// <summary>Where the value of a feature is looked at.</summary>
internal enum DriftSource
{
    /// <summary>It has no distribution of its own, as the time of day.</summary>
    None,

    /// <summary>A numeric field, as the record gives it.</summary>
    Number,

    /// <summary>One category or several crossed, or the parts of a text: the slots of the entries.</summary>
    Category,

    /// <summary>The figure of a history, before it is scaled.</summary>
    Figure,

    /// <summary>The published log-odds.</summary>
    LogOdds,
}
