using Confluent.Kafka;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Output;

/// <summary>Sends records as they are to the topics of a source: the key is the id, so that a label lands behind its event; the time is the record's.</summary>
internal sealed class RecordTopic(KafkaSourceOptions options, TopicWriter writer) : IScoreSink
{
    private readonly TopicPartition _events = new(options.Topics[0], Partition.Any);
    private readonly TopicPartition _labels = new(options.LabelTopic ?? options.Topics[0], Partition.Any);
    private long _written;

    /// <inheritdoc/>
    public string Name => "records";

    /// <inheritdoc/>
    public string MessagingSystem => "kafka";

    /// <inheritdoc/>
    public void Start(long? mark) => _written = mark ?? 0;

    /// <inheritdoc/>
    public void Write(RecordBatch records, ScoreBatch scores)
    {
        for (int i = 0; i < records.Count; i++)
        {
            ref readonly var record = ref records.Record(i);
            if (record.Kind == RecordKind.Reject) writer.Write(_events, [], records.RecordBytes(i), -1, null);
            else writer.Write(record.Kind == RecordKind.Label ? _labels : _events, records.Id(i), records.RecordBytes(i), record.TimeMicroseconds / 1000, null);
        }
        _written += records.Count;
    }

    /// <inheritdoc/>
    public long Flush()
    {
        writer.Flush();
        return _written;
    }

    /// <inheritdoc/>
    public void Dispose() => writer.Dispose();
}
