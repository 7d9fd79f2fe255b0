using System.Reflection;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace StreamLogit.Kafka.Tests.MockCluster;

/// <summary>The functions of the client library that make a mock cluster; declared in its rdkafka_mock.h.</summary>
internal static partial class NativeMock
{
    public const int Producer = 0;
    private const string Name = "librdkafka";

    [LibraryImport(Name, EntryPoint = "rd_kafka_conf_new")]
    public static partial nint ConfNew();

    [LibraryImport(Name, EntryPoint = "rd_kafka_conf_set", StringMarshalling = StringMarshalling.Utf8)]
    public static partial int ConfSet(nint config, string name, string value, nint error, nuint errorSize);

    [LibraryImport(Name, EntryPoint = "rd_kafka_new")]
    public static partial nint New(int type, nint config, nint error, nuint errorSize);

    [LibraryImport(Name, EntryPoint = "rd_kafka_destroy")]
    public static partial void Destroy(nint client);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_cluster_new")]
    public static partial nint ClusterNew(nint client, int brokers);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_cluster_destroy")]
    public static partial void ClusterDestroy(nint cluster);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_cluster_bootstraps")]
    public static partial nint Bootstraps(nint cluster);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_topic_create", StringMarshalling = StringMarshalling.Utf8)]
    public static partial int TopicCreate(nint cluster, string topic, int partitions, int replicas);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_push_request_errors_array")]
    public static partial void PushRequestErrors(nint cluster, short request, nuint count, int[] errors);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_broker_set_down")]
    public static partial int BrokerSetDown(nint cluster, int broker);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_broker_set_up")]
    public static partial int BrokerSetUp(nint cluster, int broker);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_broker_set_rtt")]
    public static partial int BrokerSetRtt(nint cluster, int broker, int milliseconds);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_coordinator_set", StringMarshalling = StringMarshalling.Utf8)]
    public static partial int CoordinatorSet(nint cluster, string kind, string key, int broker);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_partition_set_leader", StringMarshalling = StringMarshalling.Utf8)]
    public static partial int PartitionSetLeader(nint cluster, string topic, int partition, int broker);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_topic_set_error", StringMarshalling = StringMarshalling.Utf8)]
    public static partial void TopicSetError(nint cluster, string topic, int error);

    [LibraryImport(Name, EntryPoint = "rd_kafka_mock_group_initial_rebalance_delay_ms")]
    public static partial void GroupInitialRebalanceDelay(nint cluster, int milliseconds);

#pragma warning disable CA2255 // Before the first call: the library has several names, and some systems lack what one of them needs.
    [ModuleInitializer]
    public static void Resolve() => NativeLibrary.SetDllImportResolver(typeof(NativeMock).Assembly, Find);
#pragma warning restore CA2255

    private static nint Find(string name, Assembly assembly, DllImportSearchPath? path)
    {
        if (name != Name) return 0;
        foreach (string variant in new[] { Name, "centos8-librdkafka", "alpine-librdkafka" })
        {
            if (NativeLibrary.TryLoad(variant, typeof(Confluent.Kafka.Library).Assembly, path, out nint handle)) return handle;
        }
        return 0;
    }
}
