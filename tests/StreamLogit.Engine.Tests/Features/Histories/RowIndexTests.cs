using StreamLogit.Engine.Features.Histories;

namespace StreamLogit.Engine.Tests.Features.Histories;

public class RowIndexTests
{
    [Theory]
    [InlineData(1, 10_000)]
    [InlineData(2, 300)]
    public void AddAndRemove_AtRandom_FindsWhatADictionaryFinds(int seed, int keys)
    {
        var random = new Random(seed);
        var index = new RowIndex();
        var model = new Dictionary<ulong, int>();
        ulong KeyOf(int number) => (ulong)number * 0x9E3779B97F4A7C15 >> (number % 3 == 0 ? 40 : 0); // a third of the keys share their upper half
        int RowOf(ulong key, out int place)
        {
            place = index.Home(key);
            while (true)
            {
                int row = index.Next(key, ref place);
                if (row < 0 || model.TryGetValue(key, out int known) && known == row) return row;
                place = index.After(place);
            }
        }
        for (int i = 0; i < 30_000; i++)
        {
            ulong key = KeyOf(random.Next(1, keys));
            int row = RowOf(key, out int place);
            Assert.Equal(model.GetValueOrDefault(key, -1), row);
            if (row < 0)
            {
                model[key] = i;
                index.Add(key, i);
            }
            else if (random.Next(2) == 0)
            {
                model.Remove(key);
                index.RemoveAt(place);
            }
        }
        Assert.Equal(model.Count, index.Count);
    }
}
