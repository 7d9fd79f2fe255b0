namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>Where a variant stands to the reference.</summary>
public enum Standing
{
    /// <summary>There is nothing to tell them apart by.</summary>
    Same,

    /// <summary>The difference may be chance.</summary>
    Unclear,

    /// <summary>Its log-loss is lower, and that is hardly chance.</summary>
    Better,

    /// <summary>Its log-loss is higher, and that is hardly chance.</summary>
    Worse,
}
