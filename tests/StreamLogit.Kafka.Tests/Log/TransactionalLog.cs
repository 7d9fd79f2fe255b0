namespace StreamLogit.Kafka.Tests.Log;

/// <summary>
/// A log of the tests' own, in memory, with what the mock cluster lacks: transactions that are committed or not, readers who see only what was committed, offsets that are committed
/// with messages, and names of producers of which only the latest owner can write. As in Kafka, the end of a transaction takes an offset in every partition it wrote to.
/// </summary>
internal sealed class TransactionalLog
{
    private readonly Dictionary<(string Topic, int Partition), List<LoggedMessage>> _partitions = [];
    private readonly Dictionary<string, (int Epoch, LogTransaction? Open)> _producers = [];

    /// <summary>Taken by clients for each call.</summary>
    public Lock Lock { get; } = new();

    /// <summary>Where groups stand.</summary>
    public Dictionary<(string Group, string Topic, int Partition), long> Committed { get; } = [];

    public void CreateTopic(string topic, int partitions)
    {
        for (int partition = 0; partition < partitions; partition++) _partitions[(topic, partition)] = [];
    }

    public IEnumerable<int> PartitionsOf(string topic) => _partitions.Keys.Where(key => key.Topic == topic).Select(key => key.Partition);

    /// <summary>Adds a message outside of any transaction.</summary>
    public void Append(string topic, int partition, byte[] value) => _partitions[(topic, partition)].Add(new LoggedMessage(null, value, null, false));

    /// <summary>Leaves an offset out, as the end of somebody's transaction does.</summary>
    public void Skip(string topic, int partition) => _partitions[(topic, partition)].Add(new LoggedMessage(null, [], null, true));

    /// <summary>Takes a message away, as the compaction of a topic does.</summary>
    public void Remove(string topic, int partition, int offset) => _partitions[(topic, partition)][offset] = new LoggedMessage(null, [], null, true);

    /// <summary>What a reader finds from an offset on: the next message that counts, or null, and the offset behind what was passed over.</summary>
    public (LoggedMessage? Message, long Offset) Next(string topic, int partition, long from)
    {
        var messages = _partitions[(topic, partition)];
        for (long offset = from; offset < messages.Count; offset++)
        {
            var message = messages[(int)offset];
            if (message.Transaction is { IsCommitted: null }) return (null, offset);
            if (!message.IsMarker && message.Transaction is not { IsCommitted: false }) return (message, offset);
        }
        return (null, messages.Count);
    }

    public long End(string topic, int partition) => _partitions[(topic, partition)].Count;

    /// <summary>All that a reader of committed messages sees.</summary>
    public List<LoggedMessage> ReadAll(string topic)
    {
        lock (Lock)
        {
            return [.. PartitionsOf(topic).SelectMany(partition => _partitions[(topic, partition)])
                .Where(message => !message.IsMarker && message.Transaction is null or { IsCommitted: true } && !message.IsMarker)];
        }
    }

    /// <summary>Makes somebody the owner of a producer's name, and takes back what the last one left open.</summary>
    public int Own(string name)
    {
        var (epoch, open) = _producers.GetValueOrDefault(name);
        if (open is not null) End(open, isCommitted: false);
        _producers[name] = (epoch + 1, null);
        return epoch + 1;
    }

    public bool IsOwner(string name, int epoch) => _producers[name].Epoch == epoch;

    public LogTransaction? Open(string name) => _producers[name].Open;

    public void Begin(string name) => _producers[name] = _producers[name] with { Open = new LogTransaction() };

    public void Append(LogTransaction transaction, string topic, byte[]? key, byte[] value)
    {
        int[] partitions = [.. PartitionsOf(topic)];
        int partition = partitions.Length == 1 || key is null ? 0 : partitions[key.Sum(one => one) % partitions.Length];
        _partitions[(topic, partition)].Add(new LoggedMessage(key, value, transaction, false));
        transaction.Partitions.Add((topic, partition));
    }

    public void End(string name, bool isCommitted)
    {
        End(_producers[name].Open!, isCommitted);
        _producers[name] = _producers[name] with { Open = null };
    }

    private void End(LogTransaction transaction, bool isCommitted)
    {
        transaction.IsCommitted = isCommitted;
        foreach (var partition in transaction.Partitions) _partitions[partition].Add(new LoggedMessage(null, [], null, true));
        if (!isCommitted) return;
        foreach (var (partition, offset) in transaction.Offsets) Committed[partition] = offset;
    }
}
