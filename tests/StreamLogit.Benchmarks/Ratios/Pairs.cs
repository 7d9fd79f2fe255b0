using System.Diagnostics;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>Times two pieces of work in turn, so that what slows the machine slows both.</summary>
internal static class Pairs
{
    private const int Rounds = 9;

    // Until the runtime has replaced all code by its best code.
    private const int WarmUps = 12;

    /// <summary>The median over the rounds of (time of the first) / (time of the second).</summary>
    public static double MedianRatio(Action first, Action second)
    {
        var ratios = new double[Rounds];
        for (int i = 0; i < WarmUps; i++)
        {
            first();
            second();
        }
        for (int i = 0; i < Rounds; i++) ratios[i] = Seconds(first) / Seconds(second);
        Array.Sort(ratios);
        return ratios[Rounds / 2];
    }

    /// <summary>
    /// The least time of the first over the least time of the second, each over many short rounds in turn: for small differences on a machine that does other things too.
    /// </summary>
    public static double LeastRatio(Action first, Action second)
    {
        double ofFirst = double.MaxValue, ofSecond = double.MaxValue;
        for (int i = 0; i < 20 * Rounds; i++)
        {
            ofFirst = Math.Min(ofFirst, Seconds(first));
            ofSecond = Math.Min(ofSecond, Seconds(second));
        }
        return ofFirst / ofSecond;
    }

    /// <summary>The median time of one piece of work.</summary>
    public static double MedianSeconds(Action work)
    {
        var times = new double[Rounds];
        for (int i = 0; i < WarmUps; i++) work();
        for (int i = 0; i < Rounds; i++) times[i] = Seconds(work);
        Array.Sort(times);
        return times[Rounds / 2];
    }

    private static double Seconds(Action work)
    {
        var watch = Stopwatch.StartNew();
        work();
        return watch.Elapsed.TotalSeconds;
    }
}
