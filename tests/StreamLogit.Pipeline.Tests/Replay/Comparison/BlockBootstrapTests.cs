using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Tests.Replay.Comparison;

public sealed class BlockBootstrapTests
{
    [Fact]
    public void Intervals_MeanOfNormalBlocks_IsTheIntervalOfStudentsT()
    {
        var random = new SimulatedPair(1, 0, 0);
        double[][] blocks = [.. Enumerable.Range(0, 12).Select(_ => new[] { 1.0, 3 + 2 * random.Gauss() })];
        double mean = blocks.Average(b => b[1]);
        double variance = blocks.Sum(b => (b[1] - mean) * (b[1] - mean)) / 11;
        var (low, high) = new BlockBootstrap(12, 20_000, 0.9, 5).Intervals(blocks, 2, 1, (sums, figures) => figures[0] = sums[1] / sums[0])[0];

        // 1.795885 is the 95 % quantile of Student's t with 11 degrees of freedom (any table).
        double half = 1.795885 * Math.Sqrt(variance / 12);
        Assert.Equal(mean - half, low, 0.12 * half);
        Assert.Equal(mean + half, high, 0.12 * half);
    }

    [Fact]
    public void Intervals_FiguresThatAreOftenUndefined_HaveNone()
    {
        double[][] blocks = [[0], [0], [0], [0], [1]];
        var intervals = new BlockBootstrap(5, 1000, 0.9, 5).Intervals(blocks, 1, 2, (sums, figures) =>
        {
            figures[0] = sums[0] <= 1 ? double.NaN : 1;
            figures[1] = sums[0];
        });
        Assert.True(double.IsNaN(intervals[0].Low));
        Assert.Equal(0, intervals[1].Low);
        Assert.True(double.IsNaN(new BlockBootstrap(1, 1000, 0.9, 5).Intervals([[1]], 1, 1, (s, f) => f[0] = s[0])[0].High));
    }

    [Fact]
    public void Below_ManyDraws_AreUniform()
    {
        var random = new SeededRandom(42);
        int[] counts = new int[7];
        for (int i = 0; i < 70_000; i++) counts[random.Below(7)]++;
        Assert.All(counts, c => Assert.InRange(c, 9_600, 10_400));
    }
}
