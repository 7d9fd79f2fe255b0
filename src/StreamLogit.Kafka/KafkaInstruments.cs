using System.Diagnostics.Metrics;

namespace StreamLogit.Kafka;

/// <summary>What the Kafka ends of a worker count. The meter has the name of this project.</summary>
internal static class KafkaInstruments
{
    private static readonly Meter Meter = new(KafkaEnds.MeterName);

    public static Counter<long> Outages { get; } = Meter.CreateCounter<long>("streamlogit.kafka.outages", "{outage}", "Times that no broker could be reached.");

    public static Counter<long> Errors { get; } = Meter.CreateCounter<long>("streamlogit.kafka.errors", "{error}", "Errors that the client told, by their code.");

    public static Counter<long> Rebalances { get; } = Meter.CreateCounter<long>("streamlogit.kafka.rebalances", "{rebalance}", "Changes of the assigned partitions.");

    public static Counter<long> QueueFullWaits { get; } = Meter.CreateCounter<long>("streamlogit.kafka.queue_full", "{wait}", "Times that the producer's queue was full.");

    public static Counter<long> Transactions { get; } = Meter.CreateCounter<long>("streamlogit.kafka.transactions", "{transaction}", "Transactions committed.");

    public static Counter<long> Aborts { get; } = Meter.CreateCounter<long>("streamlogit.kafka.aborts", "{transaction}", "Transactions taken back.");

    public static Counter<long> TopicsMissing { get; } = Meter.CreateCounter<long>("streamlogit.kafka.topics_missing", "{topic}", "Times that a topic was not there.");
}
