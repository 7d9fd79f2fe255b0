using System.Collections.Immutable;
using StreamLogit.Engine.Health.RollUps;

namespace StreamLogit.Engine.Health;

/// <summary>The history as points, made once for each closed bucket and kept, so that a snapshot costs only what is new.</summary>
/// <param name="rollUp">The sums over time.</param>
/// <param name="settingNames">The settings of the bank, or nothing where the rows hold sums of labels only.</param>
internal sealed class HistoryCache(RollUp rollUp, ImmutableArray<string>? settingNames)
{
    private const long MicrosecondsOfMinute = 60_000_000;

    private readonly (HistoryPoint? Point, long Revision)[][] _points = [.. rollUp.Levels.ToArray().Select(level => new (HistoryPoint?, long)[level.BucketsKept])];
    private HealthHistory _history = HealthHistory.Empty;
    private long _revision = -1;

    /// <summary>The history up to the last closed minute.</summary>
    public HealthHistory History()
    {
        if (rollUp.Revision == _revision) return _history;
        _revision = rollUp.Revision;
        return _history = new HealthHistory(Level(0, withOpen: false), Level(1, withOpen: true), Level(2, withOpen: true));
    }

    private ImmutableArray<HistoryPoint> Level(int index, bool withOpen)
    {
        var level = rollUp.Levels[index];
        var points = ImmutableArray.CreateBuilder<HistoryPoint>((int)(level.Closed - level.FirstKept) + 1);
        for (long closed = level.FirstKept; closed < level.Closed; closed++)
        {
            ref var kept = ref _points[index][closed % level.BucketsKept];
            long revision = level.RevisionOf(closed);
            if (kept.Point is null || kept.Revision != revision) kept = (PointOf(level, level.BucketNumber(closed), level.NumbersOf(closed)), revision);
            points.Add(kept.Point!);
        }
        if (withOpen && !level.IsOpenEmpty) points.Add(PointOf(level, level.OpenBucket, level.Numbers));
        return points.DrainToImmutable();
    }

    private HistoryPoint PointOf(RollUpLevel level, long bucket, Span<double> numbers)
    {
        long length = level.Minutes * MicrosecondsOfMinute;
        return new HistoryPoint(
            bucket * length,
            settingNames is not null && level.Minutes == 1 ? (long)HealthRow.Minutes(numbers) * MicrosecondsOfMinute : length,
            StreamRow.FiguresWithoutScores(numbers),
            settingNames is null ? null : StreamFigures.Of(HealthRow.Stream(numbers)),
            settingNames is { } names ? StreamRow.Settings(numbers, names) : []);
    }
}
