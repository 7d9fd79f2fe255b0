using System.Runtime.InteropServices;
using Confluent.Kafka;

namespace StreamLogit.Kafka.Tests.MockCluster;

/// <summary>
/// The client library's own mock of a Kafka cluster: real sockets, the real protocol, faults on demand. It knows nothing of transactions, which it accepts
/// and ignores.
/// </summary>
public sealed class KafkaMock : IDisposable
{
    private readonly Lock _lock = new();
    private nint _client;
    private nint _cluster;

    /// <summary>A cluster of that many brokers on free ports of this machine.</summary>
    public KafkaMock(int brokers)
    {
        Library.Load();
        nint config = NativeMock.ConfNew();
        // Without a place to write to, the library writes its log to standard error.
        NativeMock.ConfSet(config, "log_level", "0", 0, 0);
        _client = NativeMock.New(NativeMock.Producer, config, 0, 0);
        _cluster = NativeMock.ClusterNew(_client, brokers);
        NativeMock.GroupInitialRebalanceDelay(_cluster, 0);
        Servers = Marshal.PtrToStringUTF8(NativeMock.Bootstraps(_cluster))!;
    }

    /// <summary>One broker.</summary>
    public KafkaMock() : this(1) { }

    /// <summary>Where its brokers listen.</summary>
    public string Servers { get; }

    public void CreateTopic(string topic, int partitions) => Check(NativeMock.TopicCreate(_cluster, topic, partitions, 1));

    /// <summary>Has the next requests of a kind fail.</summary>
    public void FailNext(ApiKey request, params ErrorCode[] errors) =>
        NativeMock.PushRequestErrors(_cluster, (short)request, (nuint)errors.Length, [.. errors.Select(error => (int)error)]);

    /// <summary>Takes all brokers away: connections break, and none can be made.</summary>
    public void TakeAway() => Check(NativeMock.BrokerSetDown(_cluster, -1));

    /// <summary>Brings all brokers back.</summary>
    public void BringBack() => Check(NativeMock.BrokerSetUp(_cluster, -1));

    /// <summary>Has every answer take so long.</summary>
    public void SetRoundTrip(TimeSpan time) => Check(NativeMock.BrokerSetRtt(_cluster, -1, (int)time.TotalMilliseconds));

    public void MoveCoordinator(string group, int broker) => Check(NativeMock.CoordinatorSet(_cluster, "group", group, broker));

    public void MoveLeader(string topic, int partition, int broker) => Check(NativeMock.PartitionSetLeader(_cluster, topic, partition, broker));

    /// <summary>Has a topic answer requests for its metadata with an error; none takes the error back.</summary>
    public void SetTopicError(string topic, ErrorCode error) => NativeMock.TopicSetError(_cluster, topic, (int)error);

    public void Dispose()
    {
        lock (_lock)
        {
            if (_cluster == 0) return;
            NativeMock.ClusterDestroy(_cluster);
            NativeMock.Destroy(_client);
            _cluster = _client = 0;
        }
    }

    private static void Check(int error)
    {
        if (error != 0) throw new InvalidOperationException($"The mock cluster says {(ErrorCode)error}.");
    }
}
