using System.Collections.Immutable;
using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health;

/// <summary>The history as points, made once for each closed bucket and kept, so that a snapshot costs only what is new.</summary>
/// <param name="rollUp">The sums over time.</param>
/// <param name="settingNames">The settings of the bank, or nothing where the rows hold sums of labels only.</param>
internal sealed class HistoryCache(RollUp rollUp, ImmutableArray<string>? settingNames)
{
    private const long MicrosecondsOfMinute = 60_000_000;

    private readonly (HistoryPoint? Point, long Revision)[][] _points = [.. rollUp.Levels.ToArray().Select(level => new (HistoryPoint?, long)[level.BucketsKept])];
    private readonly double[] _sum = new double[rollUp.Numbers.Length];
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
        if (withOpen) AddOpen(index, points);
        return points.DrainToImmutable();
    }

    /// <summary>Adds the present bucket of a level: what was rolled up into it, and what the shorter level, whose bucket is open too, has not rolled up yet.</summary>
    private void AddOpen(int index, ImmutableArray<HistoryPoint>.Builder points)
    {
        RollUpLevel level = rollUp.Levels[index], shorter = rollUp.Levels[index - 1];
        bool hasMore = index > 1 && !shorter.IsOpenEmpty;
        long bucketOfMore = hasMore ? WholeDivision.Floor(shorter.OpenBucket, level.Minutes / shorter.Minutes) : level.OpenBucket;
        if (!level.IsOpenEmpty)
        {
            var numbers = level.Numbers;
            if (hasMore && bucketOfMore == level.OpenBucket)
            {
                numbers = _sum;
                level.Numbers.CopyTo(numbers);
                NumberRow.Add(numbers, shorter.Numbers);
                hasMore = false;
            }
            points.Add(PointOf(level, level.OpenBucket, numbers));
        }
        if (hasMore) points.Add(PointOf(level, bucketOfMore, shorter.Numbers));
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
