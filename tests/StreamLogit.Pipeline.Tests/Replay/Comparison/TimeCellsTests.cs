using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Tests.Replay.Comparison;

public sealed class TimeCellsTests
{
    private const long Hour = SimulatedPair.Hour;

    [Fact]
    public void At_MoreCellsThanAllowed_AddsNeighboursUpAndLosesNothing()
    {
        var cells = new TimeCells(1, 10);
        var random = new Random(1);
        for (int i = 1; i <= 5000; i++)
        {
            cells.At(random.NextInt64(-1000 * Hour, i * Hour))[0] += 1;
            Assert.InRange(cells.Count, 1, 10);
        }
        var ordered = cells.InOrder();
        Assert.Equal(5000, ordered.Sum(c => c.Sums[0]));
        Assert.Equal(ordered.OrderBy(c => c.StartMicroseconds), ordered);
        Assert.All(ordered, c => Assert.Equal(0, c.StartMicroseconds % cells.CellMicroseconds));
    }

    [Fact]
    public void AtLeast_CoarserCells_LeavesTheOriginalAlone()
    {
        var cells = new TimeCells(1, 100);
        for (int hour = -24; hour < 48; hour++) cells.At(hour * Hour)[0] += hour;
        var days = cells.AtLeast(TimeCells.Day).InOrder();
        Assert.Equal([(-TimeCells.Day, -300.0), (0, 276), (TimeCells.Day, 852)], days.Select(d => (d.StartMicroseconds, d.Sums[0])));
        Assert.Equal(72, cells.Count);
        Assert.Equal(5, cells.At(5 * Hour)[0]);
    }

    [Fact]
    public void Next_FromAnHour_GoesThroughWholeDays()
    {
        var lengths = new List<long> { Hour };
        while (lengths.Count < 7) lengths.Add(TimeCells.Next(lengths[^1]));
        Assert.Equal([1, 2, 4, 8, 24, 48, 96], lengths.Select(l => l / Hour));
    }
}
