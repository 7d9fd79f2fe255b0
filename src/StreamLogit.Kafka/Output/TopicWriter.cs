using System.Globalization;
using Confluent.Kafka;
using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Output;

/// <summary>Writes messages to topics, at least once each: what was flushed is with the brokers. One thread at a time uses it.</summary>
internal sealed class TopicWriter : IDisposable
{
    private static readonly TimeSpan Pause = TimeSpan.FromMilliseconds(5);
    private static readonly TimeSpan FlushSlice = TimeSpan.FromMilliseconds(200);

    private readonly KafkaConnection _connection;
    private readonly IProducer<byte[], byte[]> _producer;
    private readonly Action<DeliveryReport<byte[], byte[]>> _onDelivered;
    private readonly LentArrays _keys = new();
    private readonly LentArrays _values = new();
    private readonly Message<byte[], byte[]> _message = new();
    private Error? _failure;

    public TopicWriter(KafkaConnection connection, ProducerConfig config)
    {
        _connection = connection;
        _producer = connection.CreateProducer(config);
        _onDelivered = OnDelivered;
        MaximumBytes = ClientSettings.MaximumMessageBytes(config);
    }

    /// <summary>The longest message.</summary>
    public int MaximumBytes { get; }

    /// <summary>Hands a message to the client. Waits while its queue is full.</summary>
    /// <param name="topic">The topic; the key decides the partition.</param>
    /// <param name="key">The key, or nothing.</param>
    /// <param name="value">The message.</param>
    /// <param name="milliseconds">Its time, since 1970-01-01T00:00:00Z; a time before that is left to the broker.</param>
    /// <param name="headers">Its headers, or null.</param>
    /// <exception cref="PipelineException">It cannot be written, nor could an earlier one.</exception>
    public void Write(TopicPartition topic, ReadOnlySpan<byte> key, ReadOnlySpan<byte> value, long milliseconds, Headers? headers)
    {
        ThrowFailure();
        _message.Key = key.IsEmpty ? null! : _keys.Lend(key);
        _message.Value = _values.Lend(value);
        _message.Timestamp = milliseconds < 0 ? Timestamp.Default : new Timestamp(milliseconds, TimestampType.CreateTime);
        _message.Headers = headers;
        long? fullSince = null;
        while (!TryProduce(topic))
        {
            if (fullSince is null)
            {
                fullSince = _connection.Time.GetTimestamp();
                KafkaInstruments.QueueFullWaits.Add(1);
                _connection.Log.QueueFull();
            }
            WaitSince(fullSince.Value);
            Thread.Sleep(Pause);
        }
    }

    /// <summary>Waits until the brokers have all that was written.</summary>
    /// <exception cref="PipelineException">They do not take it.</exception>
    public void Flush()
    {
        long since = _connection.Time.GetTimestamp();
        while (_producer.Flush(FlushSlice) > 0) WaitSince(since);
        ThrowFailure();
    }

    public void Dispose() => _producer.Dispose();

    private bool TryProduce(TopicPartition topic)
    {
        try
        {
            _producer.Produce(topic, _message, _onDelivered);
            return true;
        }
        catch (ProduceException<byte[], byte[]> e) when (e.Error.Code == ErrorCode.Local_QueueFull)
        {
            return false;
        }
        catch (KafkaException e)
        {
            throw Failed(e.Error);
        }
    }

    private void OnDelivered(DeliveryReport<byte[], byte[]> report)
    {
        if (report.Error.IsError) Interlocked.CompareExchange(ref _failure, report.Error, null);
        else _connection.Watch.OnAnswer();
    }

    private void WaitSince(long since)
    {
        ThrowFailure();
        _connection.Watch.ThrowIfGivenUp();
        var waited = _connection.Time.GetElapsedTime(since);
        if (waited > _connection.Settings.Options.GiveUpAfter)
            throw new PipelineException(string.Create(CultureInfo.InvariantCulture, $"The Kafka brokers took nothing for {waited.TotalSeconds:F0} s. All up to the last commit is kept."));
    }

    private void ThrowFailure()
    {
        if (Volatile.Read(ref _failure) is { } error) throw Failed(error);
    }

    private static PipelineException Failed(Error error) => error.Code switch
    {
        ErrorCode.MsgSizeTooLarge => new PipelineException(
            $"A message is larger than Kafka takes ({error.Reason}): raise max.message.bytes of the topic and message.max.bytes in scores.kafka.properties, or have fewer reasons."),
        ErrorCode.UnknownTopicOrPart or ErrorCode.Local_UnknownTopic or ErrorCode.Local_UnknownPartition =>
            new PipelineException($"A topic that is to be written does not exist: {error.Reason}. Make it, and start again."),
        ErrorCode.TopicAuthorizationFailed or ErrorCode.ClusterAuthorizationFailed =>
            new PipelineException($"The Kafka brokers do not let this worker write: {error.Reason}"),
        _ => new PipelineException($"Kafka did not take a message: {error.Reason}. All up to the last commit is kept."),
    };
}
