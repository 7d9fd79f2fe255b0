namespace StreamLogit.Engine.Definition;

/// <summary>How events wait for their labels.</summary>
public sealed record LabelOptions
{
    /// <summary>
    /// How long, in microseconds of the stream's clock, an event waits for its label, and how long after its scoring a label may still be corrected.
    /// Default 30 days.
    /// </summary>
    public long WaitMicroseconds { get; init; } = 30L * 24 * 3600 * 1_000_000;

    /// <summary>What becomes of an event whose wait is over. Default <see cref="UnlabelledEvents.Drop"/>.</summary>
    public UnlabelledEvents Unlabelled { get; init; } = UnlabelledEvents.Drop;

    /// <summary>How long, in microseconds of the stream's clock, a label that comes before its event waits for it. Default 1 hour.</summary>
    public long EarlyMicroseconds { get; init; } = 3600L * 1_000_000;

    /// <summary>
    /// How long after the time of its event, in microseconds, a label that stands in the event without a time of its own becomes known; null takes it
    /// for known at once. Default null.
    /// </summary>
    public long? DelayMicroseconds { get; init; }

    /// <summary>Which events are kept for their labels; null keeps all. Default null.</summary>
    public ThinningOptions? Keep { get; init; }

    /// <summary>How many bytes of awaiting events stay in memory; older ones are archived. Default 256 MiB.</summary>
    public long MemoryBytes { get; init; } = 256L << 20;
}
