using System.Globalization;
using Confluent.Kafka;
using StreamLogit.Engine.Records;
using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Source;

/// <summary>
/// Gives the messages of the partitions that the consumer group assigns to this worker, in the order in which they arrive. Within a partition that is the
/// order of the offsets; how partitions are merged is up to the network.
/// </summary>
internal sealed class KafkaSource : IRecordSource
{
    // How many bytes of a message that is too long its reject shows.
    private const int ShownBytes = 1024;
    private static readonly TimeSpan FirstWait = TimeSpan.FromMilliseconds(100);
    private static readonly TimeSpan CloseWithin = TimeSpan.FromSeconds(20);

    private readonly KafkaSourceOptions _options;
    private readonly KafkaConnection _connection;
    private readonly int _maximumBytes;
    private readonly bool _isPublished;
    private readonly PartitionTable _partitions;
    private readonly StartOffsets _starts;
    private readonly TopicPatience _patience;
    private readonly MessageBuffer _message = new();
    private readonly IConsumer<Ignore, int> _consumer;
    private bool _isSubscribed;
    private long _bytes;

    /// <summary>A source that joins its group with the first fill.</summary>
    /// <param name="options">The topics and the group.</param>
    /// <param name="connection">The cluster.</param>
    /// <param name="maximumBytes">The longest record; a longer one becomes a reject.</param>
    /// <param name="isPublished">
    /// Whether scores go to a topic, from which nothing can be taken back: then what the group has committed is never read again, even by an older state.
    /// </param>
    public KafkaSource(KafkaSourceOptions options, KafkaConnection connection, int maximumBytes, bool isPublished)
    {
        _options = options;
        _connection = connection;
        _maximumBytes = maximumBytes;
        _isPublished = isPublished;
        _partitions = new PartitionTable([.. options.AllTopics]);
        _starts = new StartOffsets(options.Start, connection.Watch, connection.Time);
        _patience = new TopicPatience(connection);
        _consumer = connection.CreateConsumer(options, _message, Assign, Revoke, Lose);
    }

    /// <inheritdoc/>
    public SourcePosition Position => _partitions.Position;

    /// <inheritdoc/>
    public SourceProgress Progress => new(Volatile.Read(ref _bytes), null);

    /// <inheritdoc/>
    public void Seek(SourcePosition position)
    {
        foreach (var origin in position.Origins) _partitions.Find(PartitionCursor.Parse(origin.Origin)).Next = origin.Offset;
    }

    /// <inheritdoc/>
    public ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
    {
        if (cancellation.IsCancellationRequested) return ValueTask.FromResult(FillOutcome.Idle);
        if (!_isSubscribed)
        {
            _consumer.Subscribe(_options.AllTopics);
            _isSubscribed = true;
        }
        var wait = FirstWait;
        while (batch.Count < maximumRecords && Consume(wait) is { } result)
        {
            var cursor = _partitions.Find(result.Topic, result.Partition.Value);
            if (result.IsPartitionEOF) cursor.IsAtEnd = true;
            else Take(batch, cursor, result.Offset.Value, result.Message.Value);
            wait = TimeSpan.Zero;
        }
        if (batch.Count > 0) return ValueTask.FromResult(FillOutcome.Filled);
        _connection.Watch.ThrowIfGivenUp();
        return ValueTask.FromResult(_options.UntilEnd && IsAtEnd() ? FillOutcome.Ended : FillOutcome.Idle);
    }

    /// <inheritdoc/>
    public void Committed(SourcePosition position)
    {
        foreach (var origin in position.Origins)
        {
            try
            {
                _consumer.StoreOffset(new TopicPartitionOffset(PartitionCursor.Parse(origin.Origin), origin.Offset));
            }
            catch (KafkaException)
            {
                // The partition is another worker's by now, which will commit for it.
            }
        }
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        // Closing commits the stored offsets, for which it may wait for a broker that is away.
        var closing = Task.Run(_consumer.Close);
        if (Task.WaitAny([closing], CloseWithin) == 0) _consumer.Dispose();
    }

    private ConsumeResult<Ignore, int>? Consume(TimeSpan wait)
    {
        try
        {
            return _consumer.Consume(wait);
        }
        catch (ConsumeException e)
        {
            OnFault(e.Error);
            return null;
        }
        catch (KafkaException e)
        {
            OnFault(e.Error);
            return null;
        }
    }

    private void Take(RecordBatch batch, PartitionCursor cursor, long offset, int length)
    {
        // After a change of the reading's place the client may still hold what lay behind the old one.
        if (offset < cursor.Next) return;
        if (length <= _maximumBytes) batch.Add(_message.Bytes(length), offset);
        else
        {
            string detail = string.Create(CultureInfo.InvariantCulture, $"{length} bytes; at most {_maximumBytes} are allowed");
            batch.AddTooLong(_message.Bytes(Math.Min(ShownBytes, _maximumBytes)), offset, detail);
        }
        batch.Records[^1].Origin = cursor.Origin;
        cursor.Next = offset + 1;
        cursor.IsAtEnd = false;
        Volatile.Write(ref _bytes, _bytes + length);
        _connection.Watch.OnAnswer();
        _patience.OnMessage();
    }

    private bool IsAtEnd()
    {
        bool any = false;
        foreach (var cursor in _partitions.Known)
        {
            if (!cursor.IsAssigned) continue;
            if (!cursor.IsAtEnd) return false;
            any = true;
        }
        return any;
    }

    private void OnFault(Error error)
    {
        switch (error.Code)
        {
            case ErrorCode.Local_AutoOffsetReset:
                throw new PipelineException(
                    $"What the worker is to read next is not in Kafka any more: {error.Reason}. Keep records longer, or begin with a new state folder and source.kafka.start.");
            case ErrorCode.UnknownTopicOrPart or ErrorCode.Local_UnknownTopic or ErrorCode.Local_UnknownPartition:
                _patience.OnMissing(error.Reason);
                break;
            case ErrorCode.TopicAuthorizationFailed or ErrorCode.GroupAuthorizationFailed:
                throw new PipelineException($"The Kafka brokers do not let this worker read {string.Join(", ", _options.AllTopics)} in the group {_options.Group}: {error.Reason}");
            case ErrorCode.Local_MaxPollExceeded:
                _connection.Log.PolledTooLate();
                break;
            case ErrorCode.FencedInstanceId:
                throw Fenced();
            case var _ when error.IsFatal:
                throw new PipelineException($"The Kafka consumer cannot go on: {error.Reason}");
            default:
                _connection.Watch.OnError(error);
                break;
        }
    }

    private PipelineException Fenced() => new(
        $"Another worker of the group {_options.Group} runs under the name {_options.Instance} and has taken over; this one ends. Give each worker its own source.kafka.instance.");

    private IEnumerable<TopicPartitionOffset> Assign(IReadOnlyList<TopicPartition> partitions)
    {
        KafkaInstruments.Rebalances.Add(1);
        var committed = _starts.Committed(_consumer, partitions);
        _connection.Watch.OnAnswer();
        var offsets = new List<TopicPartitionOffset>();
        foreach (var partition in partitions)
        {
            var cursor = _partitions.Find(partition);
            cursor.Next = StartOf(cursor, committed[partition]);
            cursor.IsAssigned = cursor.WasAssigned = true;
            cursor.IsAtEnd = false;
            _connection.Log.PartitionAssigned(cursor.Origin, cursor.Next);
            offsets.Add(new TopicPartitionOffset(partition, cursor.Next));
        }
        return offsets;
    }

    private long StartOf(PartitionCursor cursor, long committed)
    {
        if (cursor.Next == PartitionCursor.Unknown) return _starts.First(_consumer, cursor.Partition, committed);
        if (committed <= cursor.Next || !(_isPublished || cursor.WasAssigned)) return cursor.Next;
        _connection.Log.PartitionMovedOn(cursor.Origin, committed, cursor.Next);
        return committed;
    }

    private void Revoke(IReadOnlyList<TopicPartitionOffset> partitions)
    {
        KafkaInstruments.Rebalances.Add(1);
        foreach (var partition in partitions)
        {
            var cursor = Leave(partition);
            _connection.Log.PartitionRevoked(cursor.Origin, cursor.Next);
        }
    }

    private void Lose(IReadOnlyList<TopicPartitionOffset> partitions)
    {
        KafkaInstruments.Rebalances.Add(1);
        foreach (var partition in partitions) _connection.Log.PartitionLost(Leave(partition).Origin);
    }

    private PartitionCursor Leave(TopicPartitionOffset partition)
    {
        var cursor = _partitions.Find(partition.TopicPartition);
        cursor.IsAssigned = false;
        return cursor;
    }
}
