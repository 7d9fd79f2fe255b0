namespace StreamLogit.Kafka.Tests.Log;

/// <summary>A transaction of the test's log.</summary>
internal sealed class LogTransaction
{
    public bool? IsCommitted { get; set; }

    public HashSet<(string Topic, int Partition)> Partitions { get; } = [];

    public Dictionary<(string Group, string Topic, int Partition), long> Offsets { get; } = [];
}
