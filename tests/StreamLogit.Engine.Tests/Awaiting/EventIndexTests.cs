using CsCheck;
using StreamLogit.Engine.Awaiting;

namespace StreamLogit.Engine.Tests.Awaiting;

public class EventIndexTests
{
    // Close to where the numbers of segments start again in an entry.
    private const int FirstSegment = 3 * IndexShard.SegmentNumbers - 100;

    [Fact]
    public void AddAndRemove_RandomSequencesWithEqualHashes_AgreeWithADictionary()
    {
        // Few hashes in two shards, with homes next to each other, so that chains are long and gaps are closed across them.
        var operation = Gen.Select(Gen.ULong[0, 40], Gen.Bool, Gen.Bool);
        operation.Array[0, 3000].Sample(operations =>
        {
            var index = new EventIndex();
            var model = new Dictionary<ulong, List<EventPlace>>();
            int next = FirstSegment;
            foreach (var (low, isHighShard, isAdd) in operations)
            {
                ulong hash = (isHighShard ? 1ul << 63 : 0) | (low << 29);
                var places = model.TryGetValue(hash, out var known) ? known : model[hash] = [];
                if (isAdd || places.Count == 0)
                {
                    var place = new EventPlace(next++, 8 * (next % 2048));
                    index.Add(hash, place);
                    places.Add(place);
                }
                else
                {
                    index.Remove(hash, places[places.Count / 2], FirstSegment);
                    places.RemoveAt(places.Count / 2);
                }
            }
            Assert.Equal(model.Values.Sum(p => p.Count), index.Count);
            foreach (var (hash, places) in model)
            {
                var found = new List<EventPlace>();
                var shard = index.ShardOf(hash);
                for (int cursor = shard.First(hash); cursor >= 0; cursor = shard.Next(hash, cursor)) found.Add(shard.PlaceAt(cursor, FirstSegment));
                Assert.Equal(places.OrderBy(p => p.Segment), found.OrderBy(p => p.Segment));
            }
        }, iter: 200, seed: "0000KQZ5Nuf5");
    }

    [Fact]
    public void Bytes_ManyEvents_StayUnderFifteenAnEvent()
    {
        var index = new EventIndex();
        ulong hash = 1;
        for (int i = 0; i < 1_000_000; i++)
        {
            hash = hash * 6364136223846793005 + 1442695040888963407;
            index.Add(hash, new EventPlace(i, 0));
        }
        Assert.InRange(index.Bytes, 10_000_000, 15_000_000);
    }
}
