using System.Globalization;
using Confluent.Kafka;
using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Output;

/// <summary>Writes messages to topics, at least once each: what was flushed is with the brokers. One thread at a time uses it.</summary>
internal class TopicWriter : IDisposable
{
    private static readonly TimeSpan Pause = TimeSpan.FromMilliseconds(5);
    private static readonly TimeSpan FlushSlice = TimeSpan.FromMilliseconds(200);

    private readonly Action<DeliveryReport<byte[], byte[]>>? _onDelivered;
    private readonly LentArrays _keys = new();
    private readonly LentArrays _values = new();
    private readonly Message<byte[], byte[]> _message = new();
    private Error? _failure;

    public TopicWriter(KafkaConnection connection, ProducerConfig config)
    {
        Connection = connection;
        Producer = connection.CreateProducer(config);
        _onDelivered = config.EnableDeliveryReports == false ? null : OnDelivered;
        MaximumBytes = ClientSettings.MaximumMessageBytes(config);
    }

    /// <summary>The cluster.</summary>
    protected KafkaConnection Connection { get; }

    /// <summary>The client.</summary>
    protected IProducer<byte[], byte[]> Producer { get; private set; }

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
        BeforeWrite();
        _message.Key = key.IsEmpty ? null! : _keys.Lend(key);
        _message.Value = _values.Lend(value);
        _message.Timestamp = milliseconds < 0 ? Timestamp.Default : new Timestamp(milliseconds, TimestampType.CreateTime);
        _message.Headers = headers;
        long? fullSince = null;
        while (!TryProduce(topic))
        {
            if (fullSince is null)
            {
                fullSince = Connection.Time.GetTimestamp();
                KafkaInstruments.QueueFullWaits.Add(1);
                Connection.Log.QueueFull();
            }
            WaitSince(fullSince.Value);
            Thread.Sleep(Pause);
        }
    }

    /// <summary>Waits until the brokers have all that was written.</summary>
    /// <exception cref="PipelineException">They do not take it.</exception>
    public virtual void Flush()
    {
        long since = Connection.Time.GetTimestamp();
        while (Producer.Flush(FlushSlice) > 0) WaitSince(since);
        ThrowFailure();
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        Producer.Dispose();
        GC.SuppressFinalize(this);
    }

    /// <summary>Called before each message.</summary>
    protected virtual void BeforeWrite() { }

    /// <summary>Takes a new client, and forgets what the last one failed at.</summary>
    protected void Replace(ProducerConfig config)
    {
        Producer.Dispose();
        Producer = Connection.CreateProducer(config);
        Volatile.Write(ref _failure, null);
    }

    private bool TryProduce(TopicPartition topic)
    {
        try
        {
            Producer.Produce(topic, _message, _onDelivered);
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
        else Connection.Watch.OnAnswer();
    }

    /// <summary>Throws where what is waited for since a moment is not to be waited for any longer.</summary>
    protected void WaitSince(long since)
    {
        ThrowFailure();
        Connection.Watch.ThrowIfGivenUp();
        var waited = Connection.Time.GetElapsedTime(since);
        if (waited > Connection.Settings.Options.GiveUpAfter)
            throw new PipelineException(string.Create(CultureInfo.InvariantCulture, $"The Kafka brokers took nothing for {waited.TotalSeconds:F0} s. All up to the last commit is kept."));
    }

    private void ThrowFailure()
    {
        if (Volatile.Read(ref _failure) is { } error) throw Failed(error);
    }

    /// <summary>What a failure to write means.</summary>
    protected virtual PipelineException Failed(Error error) => error.Code switch
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
