using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Tests.Decisions;

public class ReasonFinderTests
{
    [Fact]
    public void Find_ThreeFeatures_OrdersByMagnitudeAndSumsEntries()
    {
        var vector = new VectorBuilder(new SlotLedger(8), 8, features: 8);
        foreach (var (feature, slot, value) in new[] { (0, 0, 2.0), (1, 1, 1.0), (1, 2, 1.0), (2, 3, 0.5) })
        {
            vector.Feature = feature;
            vector.Add(slot, value);
        }
        var reasons = new Reason[2];
        int found = new ReasonFinder(3).Find(vector, [0.1, -1, -2, 4], eventsBefore: 0, reasons);
        Assert.Equal(2, found);
        Assert.Equal([new Reason(1, -3), new Reason(2, 2)], reasons);
    }

    [Fact]
    public void Find_ValueAtItsRunningMean_ContributesNothing()
    {
        var vector = new VectorBuilder(new SlotLedger(8), 8, features: 8);
        for (int i = 0; i < 3; i++)
        {
            vector.Clear();
            vector.Add(0, 5);
        }
        var reasons = new Reason[3];
        int found = new ReasonFinder(1).Find(vector, [7], eventsBefore: 2, reasons);
        Assert.Equal(1, found);
        Assert.Equal(0, reasons[0].Contribution);
    }
}
