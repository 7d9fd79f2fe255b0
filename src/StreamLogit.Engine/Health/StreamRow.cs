using System.Collections.Immutable;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Health;

/// <summary>Turns the numbers and the tally of a bucket, or of a window, of the whole stream into figures.</summary>
internal static class StreamRow
{
    public static HealthFigures Figures(Span<double> numbers, Tally tally)
    {
        ref var sums = ref HealthRow.Labels(numbers);
        return HealthFigures.Of(sums, new ScoreDistribution(ImmutableCollectionsMarshal.AsImmutableArray(LogOddsBins.GroupsOf(tally)), sums.Brier / sums.Weight, sums.PositiveLogOdds));
    }

    public static HealthFigures FiguresWithoutScores(Span<double> numbers) => HealthFigures.Of(HealthRow.Labels(numbers), ScoreDistribution.Empty);

    public static StreamFigures Stream(Span<double> numbers, Tally tally)
    {
        var rejects = ImmutableSortedDictionary.CreateBuilder<string, long>(StringComparer.Ordinal);
        for (int cell = tally.NextUsed(HealthRow.FirstRejectCell); cell >= 0; cell = tally.NextUsed(cell + 1))
            rejects.Add(((RejectReason)(cell - HealthRow.FirstRejectCell)).Code(), (long)tally[cell][0]);
        return StreamFigures.Of(HealthRow.Stream(numbers)) with { LabelDelays = Delays(tally), RejectsByReason = rejects.ToImmutable() };
    }

    public static DelayDistribution Delays(Tally tally)
    {
        var bins = ImmutableArray.CreateBuilder<DelayBin>();
        for (int cell = tally.NextUsed(HealthRow.FirstDelayCell); cell >= 0 && cell < HealthRow.FirstRejectCell; cell = tally.NextUsed(cell + 1))
            bins.Add(new DelayBin(DelayBins.SecondsOf(cell - HealthRow.FirstDelayCell), tally[cell][0]));
        return bins.Count == 0 ? DelayDistribution.Empty : new DelayDistribution(bins.ToImmutable());
    }

    public static ImmutableArray<SettingFigures> Settings(Span<double> numbers, ImmutableArray<string> names)
    {
        double minutes = HealthRow.Minutes(numbers);
        var settings = ImmutableArray.CreateBuilder<SettingFigures>(names.Length);
        for (int setting = 0; setting < names.Length; setting++)
        {
            var sums = HealthRow.Setting(numbers, setting);
            settings.Add(new SettingFigures(names[setting], sums[0] / sums[2], sums[1] / sums[2], sums[3] / minutes));
        }
        return settings.MoveToImmutable();
    }
}
