using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Web.Views;

/// <summary>Cuts a history into the steps of a curve.</summary>
internal static class Curves
{
    private const long MicrosecondsOfMinute = 60_000_000;
    private const long MinutesOfHour = 60;
    private const long MinutesOfDay = 24 * MinutesOfHour;
    private const int FewestPoints = 12;
    private const double EnoughPromised = 8;

    /// <summary>
    /// The points of the past that has been asked for, oldest first. Steps in which nothing happened are left out. Where a step promises too few bad outcomes for
    /// anything to be seen, steps are longer and fewer.
    /// </summary>
    public static IReadOnlyList<CurvePoint> Of(HealthHistory history, HealthHistoryOptions kept, PastSpan past, long clockMicroseconds, int settings)
    {
        var (points, unit) = LevelOf(history, kept, past);
        long step = Math.Max(past.StepMinutes, unit) * MicrosecondsOfMinute;
        var curve = Of(points, step, past, clockMicroseconds, settings);
        while (curve.Count >= 2 * FewestPoints && curve.Sum(point => point.Promised.Expected) < EnoughPromised * curve.Count)
            curve = Of(points, step *= 2, past, clockMicroseconds, settings);
        return curve;
    }

    private static List<CurvePoint> Of(ImmutableArray<HistoryPoint> points, long step, PastSpan past, long clockMicroseconds, int settings)
    {
        long from = FloorDiv(clockMicroseconds - past.Minutes * MicrosecondsOfMinute, step) * step;
        var curve = new List<CurvePoint>();
        foreach (var point in points)
        {
            if (point.FromMicroseconds < from) continue;
            long start = FloorDiv(point.FromMicroseconds, step) * step;
            if (curve.Count == 0 || curve[^1].FromMicroseconds != start) curve.Add(new CurvePoint(start, settings));
            curve[^1].Add(point);
        }
        return curve;
    }

    // The coarsest points that are as fine as a step and go far enough back; where none do, those that go farthest.
    private static (ImmutableArray<HistoryPoint> Points, long UnitMinutes) LevelOf(HealthHistory history, HealthHistoryOptions kept, PastSpan past)
    {
        bool isWithinHours = past.Minutes <= kept.Hours * MinutesOfHour;
        if (past.StepMinutes >= MinutesOfDay || !isWithinHours) return (history.Days, MinutesOfDay);
        if (past.StepMinutes >= MinutesOfHour || past.Minutes > kept.Minutes) return (history.Hours, MinutesOfHour);
        return (history.Minutes, 1);
    }

    private static long FloorDiv(long value, long divisor)
    {
        long quotient = Math.DivRem(value, divisor, out long rest);
        return rest < 0 ? quotient - 1 : quotient;
    }
}
