using Confluent.Kafka;
using StreamLogit.Kafka.Clients;

namespace StreamLogit.Kafka.Tests.Log;

/// <summary>Makes clients of the test's log.</summary>
internal sealed class LogClients(LogProcess process, string group) : KafkaClients
{
    public override IConsumer<Ignore, int> CreateConsumer(ConsumerConfig config, MessageBuffer buffer, ConsumerEvents events) =>
        LogConsumer.Create(process, config, buffer, events);

    public override IProducer<byte[], byte[]> CreateProducer(ProducerConfig config, Action<Error> onError, Action<LogMessage> onLog) =>
        LogProducer.Create(process, config, group);
}
