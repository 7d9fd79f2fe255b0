namespace StreamLogit.Engine.Definition;

/// <summary>How events wait for their labels.</summary>
public sealed record LabelOptions
{
    /// <summary>How long, in microseconds of the stream's clock, an event waits for its label. Default 30 days.</summary>
    public long WaitMicroseconds { get; init; } = 30L * 24 * 3600 * 1_000_000;

    /// <summary>What becomes of it then. Default <see cref="UnlabelledEvents.Drop"/>.</summary>
    public UnlabelledEvents Unlabelled { get; init; } = UnlabelledEvents.Drop;
}
