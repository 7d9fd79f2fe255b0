using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Features;

public class FeatureEncoderTests
{
    private const int Slots = 1 << 10; // dense slots follow

    [Fact]
    public void Number_PlainAndLog1p_AreScaled()
    {
        var encoding = new Encoded(new NumberFeature("a", NumberScale.None), new NumberFeature("b", NumberScale.Log1p));
        var (slots, values) = encoding.Encode("""{"id":"1","time":"2026-01-01T00:00:00Z","a":-2.5,"b":-99}""");
        Assert.Equal([Slots, Slots + 2], slots);
        Assert.Equal(-2.5, values[0]);
        Assert.Equal(-Math.Log(100), values[1], 1e-15);
    }

    [Fact]
    public void Number_Missing_SwitchesOnItsOwnCoefficient()
    {
        var encoding = new Encoded(new NumberFeature("a", NumberScale.None), new NumberFeature("b", NumberScale.None));
        var (slots, values) = encoding.Encode("""{"id":"1","time":"2026-01-01T00:00:00Z","a":null}""");
        Assert.Equal([Slots + 1, Slots + 3], slots);
        Assert.Equal([1.0, 1.0], values);
        Assert.Equal(["a missing", "b missing"], encoding.Encoder.UsedSlots().Select(s => s.Name));
    }

    [Fact]
    public void Number_Standard_UsesTheEventsBeforeOnly()
    {
        var encoding = new Encoded(new NumberFeature("a", NumberScale.Standard));
        double[] numbers = [3, 5, 10, 4];
        double[] expected = [0, 0, (10 - 4) / Math.Sqrt(2), (4 - 6) / Math.Sqrt(13)];
        for (int i = 0; i < numbers.Length; i++)
        {
            var (_, values) = encoding.Encode($$"""{"id":"1","time":"2026-01-01T00:00:00Z","a":{{numbers[i]}}}""");
            Assert.Equal(expected[i], values[0], 1e-14);
        }
    }

    [Fact]
    public void Category_SameValue_SameSlot_OtherFeatureOtherSlot()
    {
        var encoding = new Encoded(new CategoryFeature(["a"]), new CategoryFeature(["b"]), new CategoryFeature(["a", "b"]));
        var (first, values) = encoding.Encode("""{"id":"1","time":"2026-01-01T00:00:00Z","a":"QX","b":"QX"}""");
        var (second, _) = encoding.Encode("""{"id":"2","time":"2026-01-01T00:00:00Z","b":"QX","a":"QX"}""");
        Assert.Equal([1.0, 1.0, 1.0], values);
        Assert.Equal(first, second);
        Assert.Equal(3, first.Distinct().Count());
        Assert.Equal(["a & b=QX & QX", "a=QX", "b=QX"], encoding.Encoder.UsedSlots().Select(s => s.Name).Order(StringComparer.Ordinal));
    }

    [Fact]
    public void Category_Missing_IsAValueOfItsOwn()
    {
        var encoding = new Encoded(new CategoryFeature(["a"]));
        int missing = encoding.Encode("""{"id":"1","time":"2026-01-01T00:00:00Z"}""").Slots[0];
        int empty = encoding.Encode("""{"id":"2","time":"2026-01-01T00:00:00Z","a":""}""").Slots[0];
        int isNull = encoding.Encode("""{"id":"3","time":"2026-01-01T00:00:00Z","a":null}""").Slots[0];
        Assert.Equal(missing, isNull);
        Assert.NotEqual(missing, empty);
    }

    [Fact]
    public void Category_KnownValue_HasTheDocumentedSlot()
    {
        // Worked out apart from the code, from the documented rule: XXH3-64 of "a" is e6c632b61e964e1f and of "QX" what FieldHash gives;
        // a change here would break every saved state.
        ulong seed = System.IO.Hashing.XxHash3.HashToUInt64("a"u8) ^ 7;
        Assert.Equal(0xe6c632b61e964e1ful, System.IO.Hashing.XxHash3.HashToUInt64("a"u8));
        ulong z = seed ^ System.IO.Hashing.XxHash3.HashToUInt64("QX"u8);
        z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9;
        z = (z ^ (z >> 27)) * 0x94D049BB133111EB;
        z ^= z >> 31;
        var encoding = new Encoded(seed: 7, new CategoryFeature(["a"]));
        var (slots, _) = encoding.Encode("""{"id":"1","time":"2026-01-01T00:00:00Z","a":"QX"}""");
        Assert.Equal((int)(z % Slots), slots[0]);
    }

    [Fact]
    public void Category_MoreValuesThanSlots_CountsCollisions()
    {
        var encoding = new Encoded(new CategoryFeature(["a"]));
        for (int i = 0; i < 5000; i++) encoding.Encode($$"""{"id":"1","time":"2026-01-01T00:00:00Z","a":"v{{i}}"}""");
        Assert.Equal(5000 - encoding.Encoder.UsedSlots().Count(), encoding.Encoder.CollidedEvents);
        Assert.InRange(encoding.Encoder.CollidedEvents, 3950, 4100);
    }

    [Fact]
    public void TimeCycle_QuarterOfThePeriod_IsExact()
    {
        var encoding = new Encoded(new TimeCycleFeature(24L * 3600 * 1_000_000, "1d"));
        Assert.Equal([1.0, 0.0], encoding.Encode("""{"id":"1","time":"2026-01-01T06:00:00Z"}""").Values);
        Assert.Equal([0.0, -1.0], encoding.Encode("""{"id":"1","time":"1969-12-31T12:00:00Z"}""").Values);
    }

    [Fact]
    public void NumberCycle_NegativeNumber_WrapsAround()
    {
        var encoding = new Encoded(new NumberCycleFeature("bearing", 360));
        var west = encoding.Encode("""{"id":"1","time":"2026-01-01T06:00:00Z","bearing":-90}""").Values;
        Assert.Equal([-1.0, 0.0], west.Select(v => Math.Round(v, 15)));
        Assert.Equal([1.0], encoding.Encode("""{"id":"1","time":"2026-01-01T06:00:00Z"}""").Values);
    }

    [Fact]
    public void SaveAndLoad_GoesOnWithTheSameVectorsAndNames()
    {
        var whole = new Encoded(new NumberFeature("n", NumberScale.Standard), new CategoryFeature(["c"]));
        var resumed = new Encoded(new NumberFeature("n", NumberScale.Standard), new CategoryFeature(["c"]));
        var kept = new StateBlocks();
        for (int i = 0; i < 200; i++)
        {
            string record = $$"""{"id":"1","time":"2026-01-01T00:00:00Z","n":{{i * i % 17}},"c":"v{{i % 23}}"}""";
            var expected = whole.Encode(record);
            var got = resumed.Encode(record);
            Assert.Equal(expected.Slots, got.Slots);
            Assert.Equal(expected.Values, got.Values);
            if (i % 31 != 0) continue;
            resumed.Encoder.Save(kept);
            resumed = new Encoded(new NumberFeature("n", NumberScale.Standard), new CategoryFeature(["c"]));
            resumed.Encoder.Load(kept);
        }
        Assert.Equal(whole.Encoder.UsedSlots(), resumed.Encoder.UsedSlots());
    }
}
