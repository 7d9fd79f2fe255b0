using System.Diagnostics;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>Times two pieces of work in turn, so that what slows the machine slows both.</summary>
internal static class Pairs
{
    private const int Rounds = 15;

    // Until the runtime has replaced all code by its best code.
    private const int WarmUps = 5;

    /// <summary>The least time of the first over the least time of the second: whatever else the machine does only adds time.</summary>
    /// <param name="first">A piece of work.</param>
    /// <param name="second">Another one.</param>
    /// <param name="rounds">How often each is timed; short pieces with a small difference need many.</param>
    public static double LeastRatio(Action first, Action second, int rounds = Rounds)
    {
        double leastOfFirst = double.MaxValue, leastOfSecond = double.MaxValue;
        for (int i = 0; i < WarmUps; i++)
        {
            first();
            second();
        }
        for (int i = 0; i < rounds; i++)
        {
            leastOfFirst = Math.Min(leastOfFirst, Seconds(first));
            leastOfSecond = Math.Min(leastOfSecond, Seconds(second));
        }
        return leastOfFirst / leastOfSecond;
    }

    /// <summary>The least time of one piece of work.</summary>
    public static double LeastSeconds(Action work)
    {
        double least = double.MaxValue;
        for (int i = 0; i < WarmUps; i++) work();
        for (int i = 0; i < Rounds; i++) least = Math.Min(least, Seconds(work));
        return least;
    }

    private static double Seconds(Action work)
    {
        var watch = Stopwatch.StartNew();
        work();
        return watch.Elapsed.TotalSeconds;
    }
}
