using StreamLogit.Engine;
using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Tests.Web.Views;

public sealed class CoefficientTrailTests
{
    private const long Minute = 60_000_000;

    [Fact]
    public void With_ManyMoments_ReachesBackToTheStartInBoundedMemory()
    {
        var trail = CoefficientTrail.Empty;
        for (int minute = 0; minute <= 100_000; minute++) trail = trail.With(Found(minute));

        Assert.InRange(trail.Moments.Length, 50, 120);
        Assert.Equal(0, trail.Moments[0].ClockMicroseconds);
        Assert.Equal(100_000 * Minute, trail.Present!.ClockMicroseconds);
        var steps = trail.Moments.Zip(trail.Moments.Skip(1), (one, next) => next.ClockMicroseconds - one.ClockMicroseconds).SkipLast(1).ToList();
        Assert.InRange(steps.Max()!.Value, 1, 4 * steps.Min()!.Value);
    }

    [Fact]
    public void With_MomentsCloserThanAMinute_ReplacesThePresentOne()
    {
        var trail = CoefficientTrail.Empty.With(Found(0)).With(Found(0)).With(Found(0));

        Assert.Equal(2, trail.Moments.Length);
    }

    [Fact]
    public void With_NothingNew_IsTheSameTrail()
    {
        var found = Found(1);
        var trail = CoefficientTrail.Empty.With(found);

        Assert.Same(trail, trail.With(found));
        Assert.Same(trail, trail.With(null));
        Assert.Null(trail.Before(0));
    }

    [Theory]
    [InlineData(0, 2)]
    [InlineData(2, 2)]
    [InlineData(4, 3)]
    [InlineData(9, 5)]
    public void Before_ATime_IsTheLastMomentUpToItButNotThePresent(long minute, long expected)
    {
        var trail = CoefficientTrail.Empty.With(Found(2)).With(Found(3)).With(Found(5)).With(Found(8));

        Assert.Equal(expected * Minute, trail.Before(minute * Minute)!.ClockMicroseconds);
    }

    private static LargestCoefficients Found(long minute) => new(minute, minute * Minute, 0, 0, []);
}
