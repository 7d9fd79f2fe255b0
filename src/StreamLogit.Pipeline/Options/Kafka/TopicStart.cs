namespace StreamLogit.Pipeline.Options.Kafka;

/// <summary>Where the reading of a partition begins that no state knows.</summary>
/// <param name="Place">The place.</param>
/// <param name="TimeMilliseconds">For <see cref="TopicPlace.Time"/>: the time of the first message, in milliseconds since 1970-01-01T00:00:00Z.</param>
public sealed record TopicStart(TopicPlace Place, long TimeMilliseconds = 0)
{
    /// <summary>Where the group stands, or at the first message where it has not begun.</summary>
    public static TopicStart Committed { get; } = new(TopicPlace.Committed);
}
