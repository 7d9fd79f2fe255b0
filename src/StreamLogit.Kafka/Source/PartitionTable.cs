using System.Collections.Immutable;
using Confluent.Kafka;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Source;

/// <summary>The partitions of the topics of a source that are known so far.</summary>
internal sealed class PartitionTable(ImmutableArray<string> topics)
{
    private readonly PartitionCursor?[][] _cursors = [.. topics.Select(_ => new PartitionCursor?[16])];
    private PartitionCursor? _last;

    /// <summary>All that are known.</summary>
    public IEnumerable<PartitionCursor> Known => _cursors.SelectMany(row => row).OfType<PartitionCursor>();

    /// <summary>How far each has been read, in an order that depends on nothing else.</summary>
    public SourcePosition Position => new(
        [.. Known.Where(cursor => cursor.Next != PartitionCursor.Unknown).Select(cursor => cursor.Position).OrderBy(position => position.Origin, StringComparer.Ordinal)]);

    /// <summary>The cursor of a partition.</summary>
    /// <param name="topic">The topic, or null where there is only one.</param>
    /// <param name="partition">The number of the partition.</param>
    public PartitionCursor Find(string? topic, int partition)
    {
        // Messages come in runs of one partition.
        if (_last is { } last && last.Partition.Partition.Value == partition && (topic is null || last.Partition.Topic == topic)) return last;
        int row = topic is null ? 0 : topics.IndexOf(topic);
        if (row < 0) throw new PipelineException($"The state has read the topic {topic}, which the definition does not name any more. Name it, or begin with a new state folder.");
        if (partition >= _cursors[row].Length) Array.Resize(ref _cursors[row], partition * 2);
        return _last = _cursors[row][partition] ??= new PartitionCursor(topics[row], partition);
    }

    /// <summary>The cursor of a partition.</summary>
    public PartitionCursor Find(TopicPartition partition) => Find(partition.Topic, partition.Partition.Value);
}
