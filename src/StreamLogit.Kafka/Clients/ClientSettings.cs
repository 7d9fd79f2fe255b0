using System.Collections.Immutable;
using System.Globalization;
using Confluent.Kafka;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Clients;

/// <summary>The properties of clients: what the definition says, with what the worker itself needs.</summary>
internal sealed class ClientSettings
{
    private const string On = "true";
    private const string Off = "false";

    private readonly ImmutableSortedDictionary<string, string> _common;

    /// <summary>Reads the secrets.</summary>
    /// <exception cref="KafkaSettingsException">A secret is not where the definition says.</exception>
    public ClientSettings(KafkaOptions options)
    {
        Options = options;
        _common = options.Properties.SetItem("bootstrap.servers", options.Servers).SetItems(Secrets.Read(options.Secrets));
    }

    public KafkaOptions Options { get; }

    /// <summary>The properties of the consumer of a source.</summary>
    public ConsumerConfig Consumer(KafkaSourceOptions source)
    {
        var config = Build<ConsumerConfig>(source.Properties, [
            // The client's default has it sleep a second whenever its queue is full: a quarter of the throughput.
            ("fetch.queue.backoff.ms", "10"),
            // A topic that was missing, or got more partitions, is noticed soon.
            ("topic.metadata.refresh.interval.ms", "2000"),
        ]);
        config.Set("group.id", source.Group);
        config.Set("group.instance.id", source.Instance);
        config.Set("partition.assignment.strategy", "cooperative-sticky");
        config.Set("isolation.level", "read_committed");
        // Offsets are stored when the state holds them, and committed behind that: for those who watch the group, and for the next owner of a partition.
        config.Set("enable.auto.commit", On);
        config.Set("enable.auto.offset.store", Off);
        // Every reading begins at an offset. Where that is not there any more, a person must know.
        config.Set("auto.offset.reset", "error");
        config.Set("enable.partition.eof", source.UntilEnd ? On : Off);
        config.ConsumeResultFields = source.AllTopics.Count() > 1 ? "topic" : "none";
        return config;
    }

    /// <summary>The properties of a consumer that takes no part in the group.</summary>
    public ConsumerConfig Reader(KafkaSourceOptions source)
    {
        var config = Consumer(source with { UntilEnd = false });
        config.GroupInstanceId = null;
        config.EnableAutoCommit = false;
        return config;
    }

    /// <summary>The properties of the producer of outputs, within transactions.</summary>
    /// <param name="own">Those of the definition.</param>
    /// <param name="transactionalId">The name under which brokers know the worker from its predecessor.</param>
    public ProducerConfig Transactional(ImmutableSortedDictionary<string, string> own, string transactionalId)
    {
        // The client waits so long before every commit.
        var config = Build<ProducerConfig>(own, [("linger.ms", "0")]);
        config.Set("enable.idempotence", On);
        config.Set("transactional.id", transactionalId);
        // A transaction is only committed if all its messages were delivered.
        config.EnableDeliveryReports = false;
        return config;
    }

    /// <summary>The properties of the producer of outputs.</summary>
    public ProducerConfig Producer(ImmutableSortedDictionary<string, string> own)
    {
        var config = Build<ProducerConfig>(own, [
            ("linger.ms", "5"),
            ("message.timeout.ms", Milliseconds(Options.GiveUpAfter)),
        ]);
        config.Set("enable.idempotence", On);
        config.DeliveryReportFields = "none";
        return config;
    }

    /// <summary>The longest message that a producer sends.</summary>
    public static int MaximumMessageBytes(ProducerConfig config) => config.MessageMaxBytes ?? 1_000_000;

    private T Build<T>(ImmutableSortedDictionary<string, string> own, ReadOnlySpan<(string Name, string Value)> defaults) where T : ClientConfig, new()
    {
        var config = new T();
        config.Set("client.id", "streamlogit");
        foreach (var (name, value) in defaults) config.Set(name, value);
        foreach (var (name, value) in _common.SetItems(own)) config.Set(name, value);
        return config;
    }

    private static string Milliseconds(TimeSpan span) => ((long)span.TotalMilliseconds).ToString(CultureInfo.InvariantCulture);
}
