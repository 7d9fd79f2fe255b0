using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Tests.Health.Detection;

namespace StreamLogit.Engine.Tests.Health;

public class LabelRunTests
{
    [Theory]
    [InlineData(1)]
    [InlineData(3)]
    [InlineData(64)]
    public void AddTo_RunsOfAnyLength_GiveTheSameBits(int length)
    {
        var labels = Labels(1000);
        var (expectedSums, expectedTally) = OneByOne(labels);
        var sums = new LabelSums();
        var tally = new Tally(LogOddsBins.Count, LogOddsBins.CellWidth);
        var baseRate = new BaseRate();
        var run = new LabelRun();
        foreach (var chunk in labels.Chunk(length))
        {
            run.Clear();
            foreach (var label in chunk)
            {
                run.Add(label, baseRate.Probability);
                baseRate.Learn(label.Label, label.Weight);
            }
            run.ComputeBaseRate();
            run.ComputeLosses();
            run.AddTo(ref sums, tally);
        }
        Assert.Equal(expectedSums, sums);
        Assert.Equal(expectedTally.Count, tally.Count);
        for (int bin = 0; bin < LogOddsBins.Count; bin++) Assert.Equal(expectedTally[bin].ToArray(), tally[bin].ToArray());
    }

    [Fact]
    public void Subtract_WhatWasAdded_LeavesNothing()
    {
        var (sums, _) = OneByOne(Labels(100));
        sums.Subtract(sums);
        Assert.Equal(new LabelSums(), sums);
    }

    /// <summary>Each label by itself, by the plain path.</summary>
    private static (LabelSums Sums, Tally Tally) OneByOne(List<CountedLabel> labels)
    {
        var sums = new LabelSums();
        var tally = new Tally(LogOddsBins.Count, LogOddsBins.CellWidth);
        var baseRate = new BaseRate();
        foreach (var label in labels)
        {
            var run = new LabelRun();
            run.Add(label, baseRate.Probability);
            baseRate.Learn(label.Label, label.Weight);
            run.ComputeBaseRate();
            run.ComputeLosses();
            run.AddTo(0, ref sums, tally);
        }
        return (sums, tally);
    }

    private static List<CountedLabel> Labels(int count)
    {
        var random = new FixedStream(17);
        return [.. Enumerable.Range(0, count).Select(i => new CountedLabel
        {
            LogOdds = i % 100 == 0 ? random.Normal() * 50 : random.Normal() * 3,
            Weight = i % 7 == 0 ? random.Uniform() * 5 : 1,
            Label = random.Label(0.3),
            Alert = random.Label(0.2),
        })];
    }
}
