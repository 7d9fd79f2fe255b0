using System.Buffers;
using Confluent.Kafka;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Formats;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Output;

/// <summary>Writes scores to a topic: the key is the event's id or a field of it, the time is the event's. Its mark is the number of scores.</summary>
internal sealed class ScoreTopic : IScoreSink
{
    private readonly TopicWriter _writer;
    private readonly TopicPartition _topic;
    private readonly int? _keyField;
    private readonly ScoreJson _json;
    private readonly ScoreHeaders _headers = new();
    private readonly ArrayBufferWriter<byte> _buffer = new(1 << 12);
    private long _written;

    public ScoreTopic(TopicOutputOptions options, EngineDefinition definition, TopicWriter writer)
    {
        _writer = writer;
        _topic = new TopicPartition(options.Topic, Partition.Any);
        _keyField = options.KeyField is { } field ? new RecordSchema(definition).IndexOf(field) : null;
        _json = new ScoreJson(definition);
    }

    /// <inheritdoc/>
    public string Name => "scores";

    /// <inheritdoc/>
    public string MessagingSystem => "kafka";

    /// <inheritdoc/>
    public string? Destination => _topic.Topic;

    /// <inheritdoc/>
    public void Start(long? mark) => _written = mark ?? 0;

    /// <inheritdoc/>
    public void Write(RecordBatch records, ScoreBatch scores)
    {
        for (int i = 0; i < scores.Count; i++)
        {
            ref readonly var score = ref scores.Scores[i];
            _buffer.ResetWrittenCount();
            _json.Write(records, scores, i, _buffer);
            long milliseconds = records.Records[score.Record].TimeMicroseconds / 1000;
            _writer.Write(_topic, Key(records, score.Record), _buffer.WrittenSpan, milliseconds, _headers.Of(score.Version));
        }
        _written += scores.Count;
    }

    /// <summary>Counts only: messages stand, and only those of committed transactions are ever repeated.</summary>
    public void Repeat(RecordBatch records, ScoreBatch scores) => _written += scores.Count;

    /// <inheritdoc/>
    public long Flush()
    {
        _writer.Flush();
        return _written;
    }

    /// <inheritdoc/>
    public void Dispose() => _writer.Dispose();

    private ReadOnlySpan<byte> Key(RecordBatch records, int record)
    {
        if (_keyField is not { } field) return records.Id(record);
        ref readonly var value = ref records.Fields(record)[field];
        return value.IsPresent ? records.Bytes.Slice(value.TextStart, value.TextLength) : [];
    }
}
