using Confluent.Kafka;
using Microsoft.Extensions.Logging;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Clients;

/// <summary>The cluster of a worker: makes its clients and watches over them.</summary>
internal sealed class KafkaConnection(ClientSettings settings, KafkaClients clients, TimeProvider time, ILogger log)
{
    public ClientSettings Settings => settings;

    public ClusterWatch Watch { get; } = new(settings.Options.GiveUpAfter, time, log);

    public TimeProvider Time => time;

    public ILogger Log => log;

    /// <summary>The consumer of a source.</summary>
    /// <exception cref="KafkaSettingsException">The settings are wrong.</exception>
    public IConsumer<Ignore, int> CreateConsumer(
        KafkaSourceOptions options,
        MessageBuffer buffer,
        Func<IReadOnlyList<TopicPartition>, IEnumerable<TopicPartitionOffset>> assigned,
        Action<IReadOnlyList<TopicPartitionOffset>> revoked,
        Action<IReadOnlyList<TopicPartitionOffset>> lost) =>
        Create("source.kafka.properties", () => clients.CreateConsumer(settings.Consumer(options), buffer, new ConsumerEvents(assigned, revoked, lost, Watch.OnError, Watch.OnLog)));

    /// <summary>A consumer that takes no part in the group.</summary>
    /// <exception cref="KafkaSettingsException">The settings are wrong.</exception>
    public IConsumer<Ignore, int> CreateReader(KafkaSourceOptions options, MessageBuffer buffer) =>
        Create("source.kafka.properties", () => clients.CreateConsumer(settings.Reader(options), buffer, new ConsumerEvents(_ => [], _ => { }, _ => { }, Watch.OnError, Watch.OnLog)));

    /// <summary>The producer of outputs.</summary>
    /// <exception cref="KafkaSettingsException">The settings are wrong.</exception>
    public IProducer<byte[], byte[]> CreateProducer(ProducerConfig config) =>
        Create("scores.kafka.properties", () => clients.CreateProducer(config, Watch.OnError, Watch.OnLog));

    private T Create<T>(string place, Func<T> create)
    {
        try
        {
            return create();
        }
        // The client tells so what is wrong with a property. It says its value too, which may be a secret.
        catch (Exception e) when (e is InvalidOperationException or ArgumentException or KafkaException)
        {
            string message = e.Message;
            foreach (var name in settings.Options.Secrets.Keys)
            {
                if (message.Contains(name, StringComparison.Ordinal)) message = $"the value of {name} is refused";
            }
            throw new KafkaSettingsException($"kafka.properties or {place}: {message}");
        }
    }
}
