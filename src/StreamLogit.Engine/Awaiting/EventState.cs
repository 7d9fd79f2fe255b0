namespace StreamLogit.Engine.Awaiting;

/// <summary>What is known of a kept event.</summary>
internal enum EventState : byte
{
    /// <summary>Its label has not come.</summary>
    Awaiting,

    /// <summary>Its label is 0.</summary>
    Good,

    /// <summary>Its label is 1.</summary>
    Bad,

    /// <summary>Its wait is over and it was learned as 0, until a real label says otherwise.</summary>
    AssumedGood,
}
