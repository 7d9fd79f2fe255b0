using System.Buffers;
using Confluent.Kafka;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Formats;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Output;

/// <summary>Writes rejects to a topic. A record too long for a message is cut. Its mark is the number of rejects.</summary>
internal sealed class RejectTopic(TopicOutputOptions options, TopicWriter writer) : IScoreSink
{
    // Everything in a reject but the record, and what the client adds to a message.
    private const int RoomForRest = 1 << 13;

    // An escaped byte takes six at most.
    private readonly int _mostRecordBytes = Math.Max(0, writer.MaximumBytes - RoomForRest) / 6;
    private readonly TopicPartition _topic = new(options.Topic, Partition.Any);
    private readonly Headers _headers = new() { { "content-type", "application/json"u8.ToArray() } };
    private readonly ArrayBufferWriter<byte> _buffer = new(1 << 12);
    private long _written;

    /// <inheritdoc/>
    public string Name => "rejects";

    /// <inheritdoc/>
    public string MessagingSystem => "kafka";

    /// <inheritdoc/>
    public string? Destination => _topic.Topic;

    /// <inheritdoc/>
    public void Start(long? mark) => _written = mark ?? 0;

    /// <inheritdoc/>
    public void Write(RecordBatch records, ScoreBatch scores)
    {
        foreach (int reject in records.Rejects)
        {
            _buffer.ResetWrittenCount();
            RejectJson.Write(records, reject, _buffer, _mostRecordBytes);
            writer.Write(_topic, [], _buffer.WrittenSpan, -1, _headers);
        }
        _written += records.Rejects.Count;
    }

    /// <summary>Counts only: messages stand, and only those of committed transactions are ever repeated.</summary>
    public void Repeat(RecordBatch records, ScoreBatch scores) => _written += records.Rejects.Count;

    /// <inheritdoc/>
    public long Flush()
    {
        writer.Flush();
        return _written;
    }

    /// <inheritdoc/>
    public void Dispose() => writer.Dispose();
}
