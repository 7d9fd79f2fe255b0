using Confluent.Kafka;

namespace StreamLogit.Kafka.Clients;

/// <summary>What a consumer tells besides messages. All but the last two are called within Consume.</summary>
/// <param name="Assigned">Partitions were assigned; returns where their reading begins.</param>
/// <param name="Revoked">Partitions go to another consumer once this returns.</param>
/// <param name="Lost">Partitions are gone, and may be another's already.</param>
/// <param name="Error">Something is wrong; the client goes on by itself unless the error is fatal.</param>
/// <param name="Log">A line of the client's own log.</param>
internal sealed record ConsumerEvents(
    Func<IReadOnlyList<TopicPartition>, IEnumerable<TopicPartitionOffset>> Assigned,
    Action<IReadOnlyList<TopicPartitionOffset>> Revoked,
    Action<IReadOnlyList<TopicPartitionOffset>> Lost,
    Action<Error> Error,
    Action<LogMessage> Log);
