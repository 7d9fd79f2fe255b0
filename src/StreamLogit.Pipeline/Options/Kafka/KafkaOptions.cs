using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Options.Kafka;

/// <summary>The Kafka cluster of a stream, and how to get at it.</summary>
public sealed record KafkaOptions
{
    /// <summary>Some of its brokers, as <c>host:port</c> joined by commas, from which the client learns the others.</summary>
    public required string Servers { get; init; }

    /// <summary>Properties of librdkafka for every client, by their names. None of them is a secret.</summary>
    public ImmutableSortedDictionary<string, string> Properties { get; init; } = ImmutableSortedDictionary<string, string>.Empty;

    /// <summary>Where the values of secret properties are found, by the names of the properties.</summary>
    public ImmutableSortedDictionary<string, SecretPlace> Secrets { get; init; } = ImmutableSortedDictionary<string, SecretPlace>.Empty;

    /// <summary>How long the brokers may be out of reach, or take nothing, before a worker ends with an error. Above 0. Default 10 min.</summary>
    public TimeSpan GiveUpAfter { get; init; } = TimeSpan.FromMinutes(10);
}
