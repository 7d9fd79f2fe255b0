using CsCheck;
using StreamLogit.Engine.Awaiting;

namespace StreamLogit.Engine.Tests.Awaiting;

public class EventIndexTests
{
    [Fact]
    public void AddAndRemove_RandomSequencesWithEqualHashes_AgreeWithADictionary()
    {
        // Few hashes, all with the same home, so that chains are long and gaps are closed across them.
        var operation = Gen.Select(Gen.ULong[0, 40], Gen.Bool);
        operation.Array[0, 3000].Sample(operations =>
        {
            var index = new EventIndex();
            var model = new Dictionary<ulong, List<EventPlace>>();
            int next = 0;
            foreach (var (hash, isAdd) in operations)
            {
                var places = model.TryGetValue(hash, out var known) ? known : model[hash] = [];
                if (isAdd || places.Count == 0)
                {
                    var place = new EventPlace(next++, 0);
                    index.Add(hash, place);
                    places.Add(place);
                }
                else
                {
                    int cursor = index.First(hash);
                    places.Remove(index.PlaceAt(cursor));
                    index.RemoveAt(cursor);
                }
            }
            Assert.Equal(model.Values.Sum(p => p.Count), index.Count);
            foreach (var (hash, places) in model)
            {
                var found = new List<EventPlace>();
                for (int cursor = index.First(hash); cursor >= 0; cursor = index.Next(hash, cursor)) found.Add(index.PlaceAt(cursor));
                Assert.Equal(places.OrderBy(p => p.Segment), found.OrderBy(p => p.Segment));
            }
        }, iter: 200, seed: "0000KQZ5Nuf5");
    }
}
