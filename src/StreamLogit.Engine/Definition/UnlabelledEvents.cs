namespace StreamLogit.Engine.Definition;

/// <summary>What becomes of an event whose label has not come when the wait is over.</summary>
public enum UnlabelledEvents
{
    /// <summary>It is forgotten and counted as expired.</summary>
    Drop,

    /// <summary>It is learned as a 0, for streams in which only bad events are ever reported.</summary>
    Negative,
}
