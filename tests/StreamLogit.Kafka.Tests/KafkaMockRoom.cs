using System.Text;
using Confluent.Kafka;
using StreamLogit.Kafka.Clients;
using StreamLogit.Kafka.Tests.MockCluster;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Tests;

/// <summary>A mock cluster for one class of tests, and what they do on it besides what they test.</summary>
public sealed class KafkaMockRoom : IDisposable
{
    private static readonly TimeSpan Limit = TimeSpan.FromSeconds(30);
    private int _groups;

    internal KafkaMockRoom(int brokers) => Cluster = new KafkaMock(brokers);

    public KafkaMockRoom() : this(1) { }

    public KafkaMock Cluster { get; }

    internal RecordedLog Log { get; } = new();

    /// <summary>A name that no test of the class had before.</summary>
    public string NewName(string what) => $"{what}-{Interlocked.Increment(ref _groups)}";

    internal KafkaOptions Options(TimeSpan? giveUpAfter = null) => new()
    {
        Servers = Cluster.Servers,
        GiveUpAfter = giveUpAfter ?? Limit,
    };

    internal KafkaConnection Connect(TimeSpan? giveUpAfter = null) => new(new ClientSettings(Options(giveUpAfter)), new KafkaClients(), TimeProvider.System, Log);

    internal static KafkaSourceOptions Source(string group, params string[] topics) => new()
    {
        Topics = [.. topics],
        Group = group,
        Instance = "main",
        UntilEnd = true,
        // As short as the mock takes it: so long a rebalance takes.
        Properties = System.Collections.Immutable.ImmutableSortedDictionary<string, string>.Empty.Add("session.timeout.ms", "1100").Add("heartbeat.interval.ms", "100"),
    };

    /// <summary>Writes messages to a partition.</summary>
    public void Produce(string topic, int partition, IEnumerable<string> messages)
    {
        using var producer = new ProducerBuilder<byte[]?, byte[]>(new ProducerConfig { BootstrapServers = Cluster.Servers, LingerMs = 5 }).Build();
        foreach (string message in messages)
            producer.Produce(new TopicPartition(topic, partition), new Message<byte[]?, byte[]> { Value = Encoding.Latin1.GetBytes(message) });
        Assert.Equal(0, producer.Flush(Limit));
    }

    /// <summary>Reads a topic to its end.</summary>
    internal List<ConsumeResult<string?, string>> ReadAll(string topic)
    {
        using var consumer = new ConsumerBuilder<string?, string>(new ConsumerConfig
        {
            BootstrapServers = Cluster.Servers, GroupId = NewName("reader"), EnablePartitionEof = true, EnableAutoCommit = false, AutoOffsetReset = AutoOffsetReset.Earliest,
        }).Build();
        var metadata = new DependentAdminClientBuilder(consumer.Handle).Build().GetMetadata(topic, Limit);
        consumer.Assign(metadata.Topics[0].Partitions.Select(partition => new TopicPartitionOffset(topic, partition.PartitionId, Offset.Beginning)));
        int open = metadata.Topics[0].Partitions.Count;
        var messages = new List<ConsumeResult<string?, string>>();
        while (open > 0)
        {
            var result = consumer.Consume(Limit) ?? throw new TimeoutException($"{topic} did not come to its end within {Limit}.");
            if (result.IsPartitionEOF) open--;
            else messages.Add(result);
        }
        consumer.Close();
        return messages;
    }

    public void Dispose() => Cluster.Dispose();
}
