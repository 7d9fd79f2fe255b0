using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Features;

public class BucketEncodingTests
{
    private const int Slots = 1 << 10;

    [Theory]
    [InlineData("-7", 0, "a below 0")]
    [InlineData("0", 1, "a from 0 to below 2.5")]
    [InlineData("2.4", 1, "a from 0 to below 2.5")]
    [InlineData("2.5", 2, "a from 2.5")]
    [InlineData("1e9", 2, "a from 2.5")]
    [InlineData("null", 3, "a missing")]
    public void Edges_Number_FindsItsBucket(string number, int bucket, string name)
    {
        var encoding = new Encoded(new BucketFeature("a") { Edges = [0, 2.5] });
        var (slots, values) = encoding.Encode($$"""{"id":"1","time":"2026-01-01T00:00:00Z","a":{{number}}}""");
        Assert.Equal([Slots + bucket], slots);
        Assert.Equal([1.0], values);
        Assert.Equal(name, Assert.Single(encoding.Encoder.UsedSlots()).Name);
    }

    [Fact]
    public void Quantiles_Numbers_AreCutByThoseBefore()
    {
        var encoding = new Encoded(new BucketFeature("a") { Quantiles = 4 });
        int[] buckets = [.. Enumerable.Range(1, 100).Select(i => encoding.Encode(Record(i)).Slots[0] - Slots)];
        Assert.Equal(2, buckets[0]); // the middle, before anything is known
        Assert.Equal(Enumerable.Repeat(3, 99), buckets[1..]); // each is the largest so far
        Assert.Equal([0, 0, 1, 2, 3, 4], new double?[] { -5, 10, 30, 60, 1000, null }.Select(n => encoding.Encode(Record(n)).Slots[0] - Slots));
    }

    [Fact]
    public void RanksAndQuantiles_SavedAndLoaded_GoOnWithTheSameVectors()
    {
        FeatureOptions[] features = [new BucketFeature("a") { Quantiles = 10 }, new NumberFeature("a", NumberScale.Rank), new NumberFeature("a", NumberScale.StandardLog1p)];
        var whole = new Encoded(features);
        var resumed = new Encoded(features);
        var kept = new StateBlocks();
        for (int i = 0; i < 2000; i++)
        {
            var expected = whole.Encode(Record(i * 7919 % 1013));
            var got = resumed.Encode(Record(i * 7919 % 1013));
            Assert.Equal(expected.Slots, got.Slots);
            Assert.Equal(expected.Values, got.Values);
            if (i % 171 != 0) continue;
            resumed.Encoder.Save(kept);
            resumed = new Encoded(features);
            resumed.Encoder.Load(kept);
        }
    }

    [Fact]
    public void Rank_Numbers_GoFromMinusOneToOne()
    {
        var encoding = new Encoded(new NumberFeature("a", NumberScale.Rank));
        double[] numbers = [5, 7, 1, 5, 6];
        // Of the numbers before: none; 1 of 1 below; 0 of 2; 1 below and 1 equal of 3; 3 of 4 below.
        double[] expected = [0, 1, -1, 2 * (1.5 / 3) - 1, 2 * (3.0 / 4) - 1];
        for (int i = 0; i < numbers.Length; i++) Assert.Equal(expected[i], encoding.Encode(Record(numbers[i])).Values[0], 1e-15);
    }

    private static string Record(double? number) => string.Create(
        System.Globalization.CultureInfo.InvariantCulture, $"{{\"id\":\"1\",\"time\":\"2026-01-01T00:00:00Z\"{(number is null ? "" : $",\"a\":{number}")}}}");
}
