using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Options.Kafka;

/// <summary>A topic that scores or rejects are written to, one JSON object a message.</summary>
/// <param name="Topic">The topic.</param>
public sealed record TopicOutputOptions(string Topic) : OutputOptions
{
    /// <summary>The field whose value is the key of a score's message, or null for the event's id.</summary>
    public string? KeyField { get; init; }

    /// <summary>Properties of librdkafka for the producer alone.</summary>
    public ImmutableSortedDictionary<string, string> Properties { get; init; } = ImmutableSortedDictionary<string, string>.Empty;

    /// <inheritdoc/>
    public override string InWords => $"the topic {Topic}";
}
