using System.Collections.Immutable;
using System.Globalization;
using Confluent.Kafka;
using StreamLogit.Engine.Records;
using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Options.Kafka;
using StreamLogit.Pipeline.Transactions;

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
    private static readonly TimeSpan SeekWithin = TimeSpan.FromSeconds(30);

    private readonly KafkaSourceOptions _options;
    private readonly KafkaConnection _connection;
    private readonly int _maximumBytes;
    private readonly OutputKind _outputs;
    private readonly PartitionTable _partitions;
    private readonly StartOffsets _starts;
    private readonly TopicPatience _patience;
    private readonly MessageBuffer _message = new();
    private readonly IConsumer<Ignore, int> _consumer;
    private RepeatedReading? _repeated;
    private bool _isSubscribed;
    private bool _mustSeek;
    private volatile bool _isClosing;
    private long _bytes;

    /// <summary>A source that joins its group with the first fill.</summary>
    /// <param name="options">The topics and the group.</param>
    /// <param name="connection">The cluster.</param>
    /// <param name="maximumBytes">The longest record; a longer one becomes a reject.</param>
    /// <param name="outputs">What becomes of the results.</param>
    public KafkaSource(KafkaSourceOptions options, KafkaConnection connection, int maximumBytes, OutputKind outputs)
    {
        _options = options;
        _connection = connection;
        _maximumBytes = maximumBytes;
        _outputs = outputs;
        _partitions = new PartitionTable([.. options.AllTopics]);
        _starts = new StartOffsets(options.Start, connection.Watch, connection.Time);
        _patience = new TopicPatience(connection);
        _consumer = connection.CreateConsumer(options, _message, Assign, Revoke, Lose);
    }

    /// <inheritdoc/>
    public SourcePosition Position => _partitions.Position;

    /// <inheritdoc/>
    public SourceProgress Progress => new(Volatile.Read(ref _bytes), null);

    /// <summary>Hears which partitions go, or are gone, to another worker, while it still can be seen what was given of them.</summary>
    public Action<IEnumerable<PartitionCursor>>? Gone { get; set; }

    /// <summary>Whether the next records are given again.</summary>
    public bool IsRepeating => _repeated is not null;

    /// <summary>As whom the worker stands in its group, for the transactions that commit its offsets. Any thread may ask.</summary>
    public IConsumerGroupMetadata GroupMetadata() => _consumer.ConsumerGroupMetadata;

    /// <summary>Where the group stands.</summary>
    public IReadOnlyDictionary<TopicPartition, long> CommittedOffsets(IReadOnlyCollection<TopicPartition> partitions) => _starts.Committed(_consumer, partitions);

    /// <summary>Whether more of a partition was given than is committed.</summary>
    public static bool HasGiven(PartitionCursor cursor, long committed) => cursor.Given > Math.Max(committed, cursor.Start);

    /// <summary>Gives the records of a journal first, in its order. From the second call on the partitions are sought anew behind them.</summary>
    public void Repeat(ImmutableArray<JournalEntry> journal)
    {
        _repeated?.Dispose();
        _repeated = journal.IsEmpty ? null : new RepeatedReading(journal, buffer => _connection.CreateReader(_options, buffer), _connection, _partitions);
        _mustSeek = _isSubscribed;
    }

    /// <inheritdoc/>
    public string MessagingSystem => "kafka";

    /// <inheritdoc/>
    public string? Destination => _options.AllTopics.Count() == 1 ? _options.Topics[0] : null;

    /// <inheritdoc/>
    public void Seek(SourcePosition position)
    {
        foreach (var cursor in _partitions.Known) cursor.Rewind();
        foreach (var origin in position.Origins) _partitions.Find(PartitionCursor.Parse(origin.Origin)).Next = origin.Offset;
    }

    /// <inheritdoc/>
    public ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
    {
        if (cancellation.IsCancellationRequested) return ValueTask.FromResult(FillOutcome.Idle);
        if (_repeated is not null) return ValueTask.FromResult(FillAgain(batch, maximumRecords, cancellation));
        if (!_isSubscribed)
        {
            _consumer.Subscribe(_options.AllTopics);
            _isSubscribed = true;
        }
        if (_mustSeek) SeekAssigned();
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
        _patience.ThrowIfGivenUp(() => StartOffsets.AreThere(_consumer, _options.AllTopics));
        return ValueTask.FromResult(_options.UntilEnd && IsAtEnd() ? FillOutcome.Ended : FillOutcome.Idle);
    }

    /// <inheritdoc/>
    public void Committed(SourcePosition position)
    {
        // Transactions have committed the offsets already.
        if (_outputs == OutputKind.Transactions) return;
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
        _isClosing = true;
        _repeated?.Dispose();
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
        Add(batch, cursor, offset, _message.Bytes(length));
        cursor.Given = cursor.Next;
        cursor.IsAtEnd = false;
        _connection.Watch.OnAnswer();
        _patience.OnThere();
    }

    private void Add(RecordBatch batch, PartitionCursor cursor, long offset, ReadOnlySpan<byte> bytes)
    {
        if (bytes.Length <= _maximumBytes) batch.Add(bytes, offset);
        else
        {
            string detail = string.Create(CultureInfo.InvariantCulture, $"{bytes.Length} bytes; at most {_maximumBytes} are allowed");
            batch.AddTooLong(bytes[..Math.Min(ShownBytes, _maximumBytes)], offset, detail);
        }
        batch.Records[^1].Origin = cursor.Origin;
        cursor.Next = offset + 1;
        Volatile.Write(ref _bytes, _bytes + bytes.Length);
    }

    private FillOutcome FillAgain(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
    {
        KeepMembership();
        _repeated!.Fill(batch, maximumRecords, Add, cancellation);
        if (_repeated.IsDone)
        {
            _repeated.Dispose();
            _repeated = null;
        }
        return batch.Count > 0 ? FillOutcome.Filled : FillOutcome.Idle;
    }

    /// <summary>Lets the group hear of this worker while it reads something else.</summary>
    private void KeepMembership()
    {
        if (!_isSubscribed) return;
        // What still comes is read again later, when the partitions are sought.
        _consumer.Pause(_consumer.Assignment);
        Consume(TimeSpan.Zero);
    }

    /// <summary>Has the client go on where the cursors stand: behind what was given again, or behind what others have read since.</summary>
    private void SeekAssigned()
    {
        long began = _connection.Time.GetTimestamp();
        var assigned = _partitions.Known.Where(cursor => cursor.IsAssigned).ToList();
        var committed = _starts.Committed(_consumer, [.. assigned.Select(cursor => cursor.Partition)]);
        foreach (var cursor in assigned)
        {
            cursor.Start = cursor.Given = cursor.Next = StartOf(cursor, committed[cursor.Partition]);
            cursor.IsAtEnd = false;
            while (!TrySeek(cursor))
            {
                if (_connection.Time.GetElapsedTime(began) > SeekWithin) throw new PipelineException($"The Kafka consumer cannot be set to {cursor.Origin}{cursor.Next}.");
                Consume(TimeSpan.FromMilliseconds(20));
            }
        }
        _consumer.Resume(_consumer.Assignment);
        _mustSeek = false;
    }

    private bool TrySeek(PartitionCursor cursor)
    {
        // Meanwhile it may have gone.
        if (!cursor.IsAssigned) return true;
        try
        {
            _consumer.Seek(new TopicPartitionOffset(cursor.Partition, cursor.Next));
            return true;
        }
        catch (KafkaException e) when (!e.Error.IsFatal)
        {
            return false;
        }
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
        _patience.OnThere();
        var offsets = new List<TopicPartitionOffset>();
        foreach (var partition in partitions)
        {
            var cursor = _partitions.Find(partition);
            // What was given before it went, and not committed, is taken back: it does not count.
            if (_outputs == OutputKind.Transactions && cursor.WasAssigned) cursor.Rewind();
            cursor.Start = cursor.Given = cursor.Next = StartOf(cursor, committed[partition]);
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
        if (committed <= cursor.Next || !(_outputs != OutputKind.Files || cursor.WasAssigned)) return cursor.Next;
        _connection.Log.PartitionMovedOn(cursor.Origin, committed, cursor.Next);
        return committed;
    }

    private void Revoke(IReadOnlyList<TopicPartitionOffset> partitions)
    {
        if (_isClosing) return;
        KafkaInstruments.Rebalances.Add(1);
        Gone?.Invoke(partitions.Select(partition => _partitions.Find(partition.TopicPartition)));
        foreach (var partition in partitions)
        {
            var cursor = Leave(partition);
            _connection.Log.PartitionRevoked(cursor.Origin, cursor.Next);
        }
    }

    private void Lose(IReadOnlyList<TopicPartitionOffset> partitions)
    {
        if (_isClosing) return;
        KafkaInstruments.Rebalances.Add(1);
        Gone?.Invoke(partitions.Select(partition => _partitions.Find(partition.TopicPartition)));
        foreach (var partition in partitions) _connection.Log.PartitionLost(Leave(partition).Origin);
    }

    private PartitionCursor Leave(TopicPartitionOffset partition)
    {
        var cursor = _partitions.Find(partition.TopicPartition);
        cursor.IsAssigned = false;
        return cursor;
    }
}
