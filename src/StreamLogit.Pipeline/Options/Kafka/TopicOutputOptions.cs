using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Options.Kafka;

/// <summary>A topic that scores or rejects are written to, one JSON object a message.</summary>
/// <param name="Topic">The topic.</param>
public sealed record TopicOutputOptions(string Topic) : OutputOptions
{
    /// <summary>The field whose value is the key of a score's message, or null for the event's id.</summary>
    public string? KeyField { get; init; }

    /// <summary>Whether scores and the offsets of the source are committed in transactions, so that every event has one score. Else every event has one at least.</summary>
    public bool IsExactlyOnce { get; init; }

    /// <summary>Wall time between two transactions, above 0. Default 100 ms.</summary>
    public TimeSpan EveryTime { get; init; } = TimeSpan.FromMilliseconds(100);

    /// <summary>Records in a transaction, 1 or more. Default 10,000.</summary>
    public int EveryEvents { get; init; } = 10_000;

    /// <summary>Properties of librdkafka for the producer alone.</summary>
    public ImmutableSortedDictionary<string, string> Properties { get; init; } = ImmutableSortedDictionary<string, string>.Empty;

    /// <inheritdoc/>
    public override string InWords => $"the topic {Topic}";
}
