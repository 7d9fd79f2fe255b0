using Confluent.Kafka;
using Confluent.Kafka.Admin;
using Testcontainers.Kafka;

namespace StreamLogit.Worker.Tests.Kafka;

/// <summary>
/// A Kafka broker with transactions: the one that the variable STREAMLOGIT_TEST_KAFKA names by its bootstrap address, or one in a container where there is a container engine.
/// </summary>
public sealed class TrueBroker : IAsyncLifetime
{
    public const string Variable = "STREAMLOGIT_TEST_KAFKA";
    private const string Image = "confluentinc/cp-kafka:7.9.0";
    private static readonly TimeSpan Limit = TimeSpan.FromMinutes(1);

    private KafkaContainer? _container;

    /// <summary>Its bootstrap address, or null where there is none.</summary>
    public string? Servers { get; private set; }

    /// <summary>Why there is none.</summary>
    public string Reason { get; private set; } = "";

    public async ValueTask InitializeAsync()
    {
        Servers = Environment.GetEnvironmentVariable(Variable);
        if (!string.IsNullOrEmpty(Servers)) return;
        try
        {
            _container = new KafkaBuilder(Image).Build();
            using var limit = new CancellationTokenSource(TimeSpan.FromMinutes(5));
            await _container.StartAsync(limit.Token);
            Servers = _container.GetBootstrapAddress();
        }
#pragma warning disable CA1031 // Whatever keeps a container from starting is the reason that the test is skipped with.
        catch (Exception e)
#pragma warning restore CA1031
        {
            Servers = null;
            Reason = $"{Variable} names no broker, and none starts in a container: {e.GetType().Name}: {e.Message.Split('\n')[0]}";
        }
    }

    public async ValueTask DisposeAsync()
    {
        if (_container is not null) await _container.DisposeAsync();
    }

    /// <summary>Makes a topic of ordinary settings.</summary>
    public async Task CreateTopicAsync(string topic, int partitions)
    {
        using var admin = new AdminClientBuilder(new AdminClientConfig { BootstrapServers = Servers }).Build();
        await admin.CreateTopicsAsync(
            [new TopicSpecification { Name = topic, NumPartitions = partitions, ReplicationFactor = 1 }], new CreateTopicsOptions { RequestTimeout = Limit, OperationTimeout = Limit });
    }

    /// <summary>All committed messages of a topic, partition by partition.</summary>
    public List<(string Key, string Value)> ReadCommitted(string topic)
    {
        using var consumer = new ConsumerBuilder<string, string>(new ConsumerConfig
        {
            BootstrapServers = Servers, GroupId = $"reader-{Guid.NewGuid():N}", EnableAutoCommit = false, EnablePartitionEof = true, IsolationLevel = IsolationLevel.ReadCommitted,
            AutoOffsetReset = AutoOffsetReset.Earliest,
        }).Build();
        using var admin = new DependentAdminClientBuilder(consumer.Handle).Build();
        var partitions = admin.GetMetadata(topic, Limit).Topics[0].Partitions.Select(partition => new TopicPartitionOffset(topic, partition.PartitionId, Offset.Beginning)).ToList();
        var found = new List<(string, string)>();
        foreach (var partition in partitions)
        {
            consumer.Assign(partition);
            while (true)
            {
                var result = consumer.Consume(Limit) ?? throw new TimeoutException($"{partition} did not come to its end within {Limit}.");
                if (result.IsPartitionEOF) break;
                found.Add((result.Message.Key, result.Message.Value));
            }
        }
        consumer.Close();
        return found;
    }
}
