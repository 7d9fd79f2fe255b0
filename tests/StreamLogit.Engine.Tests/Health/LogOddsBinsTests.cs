using StreamLogit.Engine.Health;

namespace StreamLogit.Engine.Tests.Health;

public class LogOddsBinsTests
{
    [Fact]
    public void Of_AnyLogOdds_LiesWithinTheBoundsOfItsBin()
    {
        int previous = 0;
        for (double z = -900; z < 900; z += 1.0 / 128)
        {
            int bin = LogOddsBins.Of(z);
            var bounds = LogOddsBins.BoundsOf(bin);
            Assert.True(bounds.Low <= z && z <= bounds.High, $"{z} is not in bin {bin}, {bounds}");
            Assert.InRange(bin, previous, LogOddsBins.Count - 1);
            previous = bin;
        }
        Assert.Equal(LogOddsBins.Count - 1, previous);
        Assert.Equal(0, LogOddsBins.Of(double.MinValue));
        Assert.Equal(LogOddsBins.Count - 1, LogOddsBins.Of(double.MaxValue));
    }

    [Fact]
    public void BoundsOf_AllBins_FollowEachOther()
    {
        Assert.Equal(double.NegativeInfinity, LogOddsBins.BoundsOf(0).Low);
        for (int bin = 1; bin < LogOddsBins.Count; bin++)
            Assert.Equal(LogOddsBins.BoundsOf(bin - 1).High, LogOddsBins.BoundsOf(bin).Low);
        Assert.Equal(1.0 / 32, LogOddsBins.BoundsOf(LogOddsBins.Of(0)).High);
        Assert.Equal(double.PositiveInfinity, LogOddsBins.BoundsOf(LogOddsBins.Count - 1).High);
    }

    [Fact]
    public void DelayBins_AnyDelay_LiesInABinAQuarterWide()
    {
        for (long microseconds = 1; microseconds < 1L << 47; microseconds += microseconds / 7 + 1)
        {
            var seconds = DelayBins.SecondsOf(DelayBins.Of(microseconds));
            Assert.InRange(microseconds / 1e6, seconds.Low, seconds.High);
            Assert.True(seconds.High <= 1.25 * seconds.Low * (1 + 1e-12));
        }
        Assert.Equal(DelayBins.Count - 1, DelayBins.Of(long.MaxValue));
    }
}
