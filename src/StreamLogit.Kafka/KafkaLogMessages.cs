using Microsoft.Extensions.Logging;

namespace StreamLogit.Kafka;

/// <summary>Everything that the Kafka ends of a worker log.</summary>
internal static partial class KafkaLogMessages
{
    [LoggerMessage(101, LogLevel.Warning, "Kafka: no broker can be reached ({Reason}). The worker waits for {GiveUpAfter} at most")]
    public static partial void BrokersAway(this ILogger logger, string reason, TimeSpan giveUpAfter);

    [LoggerMessage(102, LogLevel.Information, "Kafka: brokers can be reached again after {Seconds:F0} s")]
    public static partial void BrokersBack(this ILogger logger, double seconds);

    [LoggerMessage(103, LogLevel.Error, "Kafka: the brokers refuse the credentials: {Reason}")]
    public static partial void AuthenticationRefused(this ILogger logger, string reason);

    [LoggerMessage(104, LogLevel.Information, "Kafka: reads {Partition} from offset {Offset} on")]
    public static partial void PartitionAssigned(this ILogger logger, string partition, long offset);

    [LoggerMessage(105, LogLevel.Information, "Kafka: {Partition} goes to another worker, from offset {Offset} on")]
    public static partial void PartitionRevoked(this ILogger logger, string partition, long offset);

    [LoggerMessage(106, LogLevel.Warning, "Kafka: {Partition} was lost, because the group did not hear of this worker in time")]
    public static partial void PartitionLost(this ILogger logger, string partition);

    [LoggerMessage(107, LogLevel.Warning, "Kafka: {Partition} was read by another worker, or with a newer state, up to offset {Committed}; this one knew it up to {Known} and goes on behind the other")]
    public static partial void PartitionMovedOn(this ILogger logger, string partition, long committed, long known);

    [LoggerMessage(108, LogLevel.Warning, "Kafka: {Reason}. The worker waits for the topic, for {GiveUpAfter} at most")]
    public static partial void TopicMissing(this ILogger logger, string reason, TimeSpan giveUpAfter);

    [LoggerMessage(109, LogLevel.Warning, "Kafka: more than max.poll.interval.ms went by between two reads, so that the group took the partitions away; the worker joins again")]
    public static partial void PolledTooLate(this ILogger logger);

    [LoggerMessage(110, LogLevel.Warning, "Kafka: the producer's queue is full; the worker waits for the brokers to take what is in it")]
    public static partial void QueueFull(this ILogger logger);

    [LoggerMessage(113, LogLevel.Information, "Kafka: {Records} records after the last commit of the state were published before; they are read again without publishing")]
    public static partial void Repeats(this ILogger logger, long records);

    [LoggerMessage(111, LogLevel.Debug, "Kafka client: {Facility}: {Message}")]
    public static partial void ClientSays(this ILogger logger, string facility, string message);

    [LoggerMessage(112, LogLevel.Debug, "Kafka: {Code}: {Reason}")]
    public static partial void ClientError(this ILogger logger, string code, string reason);
}
