using Confluent.Kafka;

namespace StreamLogit.Kafka.Clients;

/// <summary>Makes clients. Tests make clients of a log of their own.</summary>
internal class KafkaClients
{
    /// <summary>A consumer that knows its group and reads nothing yet.</summary>
    public virtual IConsumer<Ignore, int> CreateConsumer(ConsumerConfig config, MessageBuffer buffer, ConsumerEvents events) =>
        new ConsumerBuilder<Ignore, int>(config)
            .SetValueDeserializer(buffer)
            .SetPartitionsAssignedHandler((_, partitions) => events.Assigned(partitions))
            .SetPartitionsRevokedHandler((_, partitions) => events.Revoked(partitions))
            .SetPartitionsLostHandler((_, partitions) => events.Lost(partitions))
            .SetErrorHandler((_, error) => events.Error(error))
            .SetLogHandler((_, message) => events.Log(message))
            .Build();

    /// <summary>A producer.</summary>
    public virtual IProducer<byte[], byte[]> CreateProducer(ProducerConfig config, Action<Error> onError, Action<LogMessage> onLog) =>
        new ProducerBuilder<byte[], byte[]>(config)
            .SetErrorHandler((_, error) => onError(error))
            .SetLogHandler((_, message) => onLog(message))
            .Build();
}
