using System.Collections.Immutable;
using Confluent.Kafka;
using StreamLogit.Engine.Records;
using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Kafka.Source;

/// <summary>
/// Reads the records of a journal again, in exactly its order, with a consumer that takes no part in the group: whose the partitions are by now does not
/// matter for that.
/// </summary>
internal sealed class RepeatedReading : IDisposable
{
    // Messages of a partition that came before their turn.
    private const int MostWaiting = 20_000;
    private static readonly TimeSpan Wait = TimeSpan.FromMilliseconds(100);

    private readonly ImmutableArray<JournalEntry> _journal;
    private readonly KafkaConnection _connection;
    private readonly PartitionTable _partitions;
    private readonly MessageBuffer _message = new();
    private readonly IConsumer<Ignore, int> _consumer;
    private readonly Dictionary<PartitionCursor, Queue<(long Offset, byte[] Bytes)>> _waiting = [];
    private readonly HashSet<PartitionCursor> _paused = [];
    private readonly Dictionary<string, long> _next = new(StringComparer.Ordinal); // a rebalance meanwhile moves the cursors
    private int _entry;
    private int _run;
    private int _taken; // of the run at hand

    /// <summary>Begins to read what a journal holds, which is not empty.</summary>
    public RepeatedReading(ImmutableArray<JournalEntry> journal, Func<MessageBuffer, IConsumer<Ignore, int>> createConsumer, KafkaConnection connection, PartitionTable partitions)
    {
        _journal = journal;
        _connection = connection;
        _partitions = partitions;
        _consumer = createConsumer(_message);
        var starts = new Dictionary<string, long>(StringComparer.Ordinal);
        foreach (var span in journal.SelectMany(entry => entry.Spans)) starts.TryAdd(span.Origin, span.From);
        _consumer.Assign(starts.Select(start => new TopicPartitionOffset(PartitionCursor.Parse(start.Key), start.Value)));
        foreach (var (origin, start) in starts)
        {
            var cursor = Cursor(origin);
            cursor.Next = start;
            _waiting[cursor] = [];
        }
    }

    /// <summary>Whether all was given.</summary>
    public bool IsDone => _entry == _journal.Length;

    /// <summary>Adds the next records to an empty batch.</summary>
    /// <exception cref="PipelineException">They are not there any more.</exception>
    public void Fill(RecordBatch batch, int maximumRecords, Action<RecordBatch, PartitionCursor, long, ReadOnlySpan<byte>> add, CancellationToken cancellation)
    {
        long began = _connection.Time.GetTimestamp();
        while (!IsDone && batch.Count < maximumRecords && !cancellation.IsCancellationRequested)
        {
            var entry = _journal[_entry];
            var run = entry.Order[_run];
            var cursor = Cursor(entry.Spans[run.Span].Origin);
            if (_waiting[cursor].TryDequeue(out var message))
            {
                add(batch, cursor, message.Offset, message.Bytes);
                _next[cursor.Origin] = message.Offset + 1;
                if (++_taken == run.Count) EndRun(entry);
                continue;
            }
            if (_paused.Remove(cursor)) _consumer.Resume([cursor.Partition]);
            if (Consume()) continue;
            if (batch.Count > 0) return;
            _connection.Watch.ThrowIfGivenUp();
            if (_connection.Time.GetElapsedTime(began) > _connection.Settings.Options.GiveUpAfter)
                throw new PipelineException($"Records that were read before, from {cursor.Origin}{cursor.Next} on, do not come again from Kafka.");
        }
    }

    /// <inheritdoc/>
    public void Dispose() => _consumer.Dispose();

    private PartitionCursor Cursor(string origin) => _partitions.Find(PartitionCursor.Parse(origin));

    private void EndRun(JournalEntry entry)
    {
        _taken = 0;
        if (++_run < entry.Order.Length) return;
        foreach (var span in entry.Spans)
        {
            if (_next[span.Origin] != span.To)
                throw new PipelineException($"The records of {span.Origin}{span.From} to {span.To - 1} are not those that were read before: were some deleted, or the topic made anew? Begin with a new state folder.");
        }
        _run = 0;
        _entry++;
    }

    /// <summary>Takes a message into its queue; false when there was none.</summary>
    private bool Consume()
    {
        ConsumeResult<Ignore, int>? result;
        try
        {
            result = _consumer.Consume(Wait);
        }
        catch (ConsumeException e) when (e.Error.Code is ErrorCode.Local_AutoOffsetReset or ErrorCode.OffsetOutOfRange)
        {
            throw new PipelineException($"Records that the worker must read again are not in Kafka any more: {e.Error.Reason}. Keep records for longer than the worker may stand still, or begin with a new state folder.", e);
        }
        catch (KafkaException e) when (!e.Error.IsFatal)
        {
            _connection.Watch.OnError(e.Error);
            return false;
        }
        if (result is null || result.IsPartitionEOF) return false;
        _connection.Watch.OnAnswer();
        var cursor = _partitions.Find(result.Topic, result.Partition.Value);
        var queue = _waiting[cursor];
        queue.Enqueue((result.Offset.Value, _message.Bytes(result.Message.Value).ToArray()));
        if (queue.Count > MostWaiting && _paused.Add(cursor)) _consumer.Pause([cursor.Partition]);
        return true;
    }
}
