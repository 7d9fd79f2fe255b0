namespace StreamLogit.Engine.Awaiting;

/// <summary>How often something other than a first label happened to an event.</summary>
internal struct LabelEvents
{
    /// <summary>Its wait ended without a label.</summary>
    public long Expired;

    /// <summary>It was not kept for its label.</summary>
    public long Thinned;

    /// <summary>Its label came again.</summary>
    public long Repeated;

    /// <summary>Its label was corrected.</summary>
    public long Corrected;

    /// <summary>Its label stood in it and was taken for known at once, though nothing said so.</summary>
    public long TaughtAtOnce;
}
