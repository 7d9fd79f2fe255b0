using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Tests.Health.Detection;

namespace StreamLogit.Engine.Tests.Health.RollUps;

public class RollUpTests
{
    private const int Numbers = 3;
    private const int Cells = 100;
    private const int Width = 4;

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(4)]
    public void Window_RandomStream_IsTheSumOfItsRecords(ulong seed)
    {
        // A plain list of everything is the oracle. Whole numbers, so that sums are exact whatever their order.
        var random = new FixedStream(seed);
        var records = new List<(long Minute, double Value, int Cell)>();
        var kept = new StateBlocks();
        var rollUp = Create();
        long minute = -5000 + (long)(random.Uniform() * 100);
        for (int i = 0; i < 6000; i++)
        {
            minute += random.Uniform() switch { < 0.7 => 0, < 0.98 => 1 + (long)(random.Uniform() * 3), < 0.998 => (long)(random.Uniform() * 200), _ => (long)(random.Uniform() * 5000) };
            rollUp.MoveTo(minute);
            int cell = (int)(random.Uniform() * random.Uniform() * Cells);
            double value = Math.Floor(random.Uniform() * 100) + 1;
            rollUp.Numbers[1] += value;
            rollUp.Tally.Use(cell) += value;
            records.Add((minute, value, cell));
            if (random.Uniform() < 0.02)
            {
                int changed = (int)(random.Uniform() * records.Count);
                var (changedMinute, old, changedCell) = records[changed];
                rollUp.Change(changedMinute, [0, 1000, 0], changedCell, [1000, 0, 0, 0]);
                records[changed] = (changedMinute, old + 1000, changedCell);
            }
            if (random.Uniform() < 0.01)
            {
                rollUp.Save(kept);
                rollUp = Create();
                Assert.True(rollUp.Load(kept));
            }
            if (random.Uniform() > 0.05) continue;
            foreach (long length in new long[] { 1, 10, 30, 31, 120, 600, 1440, 5000 }) CheckWindow(rollUp, records, minute + (long)(random.Uniform() * 3), length);
            CheckTotal(rollUp, records);
        }
    }

    [Fact]
    public void MoveTo_EmptyMinutes_TakeNoBucket()
    {
        var rollUp = Create();
        for (int hour = 0; hour < 10; hour++)
        {
            rollUp.MoveTo(hour * 60 + 7);
            rollUp.Numbers[0]++;
        }
        rollUp.MoveTo(100_000);
        Assert.Equal(10, rollUp.Levels[0].Closed);
        Assert.Equal([0L, 60, 120, 180, 240, 300, 360, 420, 480, 540], Enumerable.Range(0, 10).Select(i => rollUp.Levels[0].BucketNumber(i) - 7));
    }

    [Fact]
    public void MoveTo_AnyLength_MemoryStaysBounded()
    {
        var random = new FixedStream(3);
        var rollUp = Create(days: 5);
        long before = 0;
        for (int minute = 0; minute < 60_000; minute++)
        {
            // The first days grow the rings.
            if (minute == 20_000) before = GC.GetAllocatedBytesForCurrentThread();
            rollUp.MoveTo(minute);
            for (int i = 0; i < 20; i++) rollUp.Tally.Use((int)(random.Uniform() * Cells))++;
        }
        Assert.Equal(0, GC.GetAllocatedBytesForCurrentThread() - before);
    }

    [Fact]
    public void Load_OtherShape_IsNotTakenUp()
    {
        var kept = new StateBlocks();
        Create().Save(kept);
        var other = new RollUp("test", Numbers + 1, Cells, Width, 4, new RollUpRetention(1, 30, 30));
        Assert.False(other.Load(kept));
        Assert.False(Create().Load(new StateBlocks()));
    }

    [Fact]
    public void Save_SecondTime_WritesOnlyWhatChanged()
    {
        var rollUp = Create();
        for (int minute = 0; minute < 200; minute++)
        {
            rollUp.MoveTo(minute);
            rollUp.Numbers[0]++;
        }
        var first = new StateBlocks();
        rollUp.Save(first);
        rollUp.MoveTo(200);
        var second = new StateBlocks();
        rollUp.Save(second);
        Assert.Equal([("test", 0L), ("test/1m", 199L % 30)], second.Changes().Select(c => (c.Part, c.Number)));
    }

    private static RollUp Create(int days = 400) => new(
        "test", Numbers, Cells, Width, cellsPerTallyAtFirst: 4,
        new RollUpRetention(1, 30, 30), new RollUpRetention(60, 24, 24), new RollUpRetention(1440, days, days));

    private static void CheckWindow(RollUp rollUp, List<(long Minute, double Value, int Cell)> records, long last, long length)
    {
        var numbers = new double[Numbers];
        var tally = new Tally(Cells, Width);
        long start = rollUp.Window(last, length, numbers, tally);
        long unit = length <= 30 ? 1 : length <= 1440 ? 60 : 1440;
        Assert.Equal(0, start % unit);
        Assert.InRange(last - length + 1 - start, 0, unit - 1);
        var inside = records.Where(r => r.Minute >= start).ToList();
        Assert.Equal(inside.Sum(r => r.Value), numbers[1]);
        foreach (var cell in inside.GroupBy(r => r.Cell)) Assert.Equal(cell.Sum(r => r.Value), tally[cell.Key][0]);
        Assert.Equal(inside.Select(r => r.Cell).Distinct().Count(), tally.Count);
    }

    private static void CheckTotal(RollUp rollUp, List<(long Minute, double Value, int Cell)> records)
    {
        var numbers = new double[Numbers];
        var tally = new Tally(Cells, Width);
        rollUp.Total(numbers, tally);
        Assert.Equal(records.Sum(r => r.Value), numbers[1]);
        Assert.Equal(records.Where(r => r.Cell == 3).Sum(r => r.Value), tally[3][0]);
    }
}
