namespace StreamLogit.Pipeline.Options.Kafka;

/// <summary>A place in a partition.</summary>
public enum TopicPlace
{
    /// <summary>Where the group stands, or at the first message where it has not begun.</summary>
    Committed,

    /// <summary>At the first message that is there.</summary>
    Earliest,

    /// <summary>Behind the last message that is there.</summary>
    Latest,

    /// <summary>At the first message of a time.</summary>
    Time,
}
