using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Options.Kafka;

/// <summary>Records from topics.</summary>
public sealed record KafkaSourceOptions : SourceOptions
{
    /// <summary>The topics of events, and of labels where they come in the same; at least one.</summary>
    public required ImmutableArray<string> Topics { get; init; }

    /// <summary>The topic of labels, or null where they come in <see cref="Topics"/>.</summary>
    public string? LabelTopic { get; init; }

    /// <summary>The consumer group.</summary>
    public required string Group { get; init; }

    /// <summary>The name of this worker within the group. Of two workers with the same name, the one that starts later takes over.</summary>
    public required string Instance { get; init; }

    /// <summary>Where a worker without a state begins. Default <see cref="TopicStart.Committed"/>.</summary>
    public TopicStart Start { get; init; } = TopicStart.Committed;

    /// <summary>Properties of librdkafka for the consumer alone.</summary>
    public ImmutableSortedDictionary<string, string> Properties { get; init; } = ImmutableSortedDictionary<string, string>.Empty;

    /// <summary>Whether the source ends where the partitions do, instead of waiting for more. Default false.</summary>
    public bool UntilEnd { get; init; }

    /// <summary>All topics that are read.</summary>
    public IEnumerable<string> AllTopics => LabelTopic is null ? Topics : Topics.Append(LabelTopic);
}
