using System.Collections.Immutable;
using Confluent.Kafka;
using Microsoft.Extensions.Logging;
using StreamLogit.Kafka.Output;
using StreamLogit.Kafka.Source;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Kafka;

/// <summary>The transactions of a worker between topics: scores and rejects with the offsets of its consumer.</summary>
/// <remarks>
/// A partition goes to its next owner only when the handler of its revocation returns. The handler takes the same lock as a commit: what the commit holds is
/// committed before the next owner asks where to begin, and what is still on its way then is never committed.
/// </remarks>
internal sealed class KafkaTransaction(KafkaSource source, TransactionalWriter writer, ILogger log) : IStreamTransaction
{
    private readonly Lock _gate = new();
    private readonly Dictionary<string, long> _committed = new(StringComparer.Ordinal);
    private string? _closed;

    /// <inheritdoc/>
    public bool IsRepeating => source.IsRepeating;

    /// <inheritdoc/>
    public void Recover()
    {
        writer.Recover();
        lock (_gate)
        {
            _closed = null;
            _committed.Clear();
        }
    }

    /// <inheritdoc/>
    public bool IsCommitted(ImmutableArray<OriginSpan> spans)
    {
        var committed = source.CommittedOffsets([.. spans.Select(span => PartitionCursor.Parse(span.Origin))]);
        return spans.All(span => committed[PartitionCursor.Parse(span.Origin)] >= span.To);
    }

    /// <inheritdoc/>
    public void Repeat(ImmutableArray<JournalEntry> journal)
    {
        if (!journal.IsEmpty) log.Repeats(journal.Sum(entry => entry.Order.Sum(run => (long)run.Count)));
        source.Repeat(journal);
    }

    /// <inheritdoc/>
    public void Commit(ImmutableArray<OriginSpan> spans)
    {
        lock (_gate)
        {
            if (_closed is { } reason)
            {
                writer.Abort();
                throw new RewindException(reason);
            }
            writer.Commit([.. spans.Select(span => new TopicPartitionOffset(PartitionCursor.Parse(span.Origin), span.To))], source.GroupMetadata);
            foreach (var span in spans) _committed[span.Origin] = span.To;
        }
    }

    /// <summary>Hears that partitions go, or are gone, to another worker. What is on its way of them must not be committed any more.</summary>
    public void OnGone(IEnumerable<PartitionCursor> partitions)
    {
        lock (_gate)
        {
            foreach (var cursor in partitions)
            {
                if (KafkaSource.HasGiven(cursor, _committed.GetValueOrDefault(cursor.Origin, PartitionCursor.Unknown)))
                    _closed ??= $"{cursor.Origin} went to another worker before what was read of it was published";
            }
        }
    }
}
