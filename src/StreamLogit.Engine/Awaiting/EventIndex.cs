namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// From the hash of an id to where its event lies. Two ids may look the same here: whoever looks up walks all places that may be meant and compares the ids.
/// Divided into shards that grow one at a time, so that growing never needs the whole index twice.
/// </summary>
internal sealed class EventIndex
{
    private const int ShardBits = 8;
    private readonly IndexShard[] _shards = [.. Enumerable.Range(0, 1 << ShardBits).Select(_ => new IndexShard())];

    public int Count { get; private set; }

    /// <summary>Bytes of memory that the index takes.</summary>
    public long Bytes => _shards.Sum(s => s.Bytes);

    /// <summary>Where the places of a hash are.</summary>
    public IndexShard ShardOf(ulong hash) => _shards[hash >> (64 - ShardBits)];

    public void Add(ulong hash, EventPlace place)
    {
        ShardOf(hash).Add(hash, place);
        Count++;
    }

    /// <param name="hash">The hash of the event's id.</param>
    /// <param name="place">Where it lies.</param>
    /// <param name="firstSegment">The number of the first segment that there is.</param>
    public void Remove(ulong hash, EventPlace place, int firstSegment)
    {
        var shard = ShardOf(hash);
        for (int cursor = shard.First(hash); cursor >= 0; cursor = shard.Next(hash, cursor))
        {
            if (shard.PlaceAt(cursor, firstSegment) != place) continue;
            shard.RemoveAt(cursor);
            Count--;
            return;
        }
    }
}
