using StreamLogit.Pipeline.Replay.Backtest;
using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>What a backtest found, in plain words.</summary>
internal static class Verdict
{
    /// <summary>The answer in a few words.</summary>
    public static string Headline(BacktestResult result)
    {
        var variants = result.Comparison.Variants;
        if (result.Comparison.Count == 0) return "There is nothing to compare: no label became known.";
        if (variants.IsEmpty) return Baseline(result) ?? $"The definition has a log-loss of {Words.Mean(result.Comparison.Reference.LogLoss)}.";
        if (Best(variants) is { } best) return $"Yes: {best.Name} would have helped.";
        if (variants.All(v => Standings.Of(v, variants.Length) == Standing.Worse))
            return variants.Length == 1 ? $"No: {variants[0].Name} would have hurt." : "No: every change that was tried would have hurt.";
        return variants.Length == 1 ? $"It does not show that {variants[0].Name} would have helped." : "It does not show that any change would have helped.";
    }

    /// <summary>What stands behind it, one sentence or two a paragraph.</summary>
    public static IEnumerable<string> Paragraphs(BacktestResult result)
    {
        var comparison = result.Comparison;
        if (comparison.Count == 0) yield break;
        if (!comparison.Variants.IsEmpty)
        {
            var shown = Shown(comparison.Variants);
            yield return $"{shown.Name} has a log-loss of {Words.Mean(shown.Figures.LogLoss)} over {Words.Of(comparison.Count, "label", "labels")}, against "
                + $"{Words.Mean(comparison.Reference.LogLoss)} of the definition as it stands: {Words.Signed(shown.Losses.LogLoss.Value)}"
                + (double.IsFinite(shown.Losses.LogLoss.Low)
                    ? $", with a {comparison.Level * 100:0} % interval from {Words.Signed(shown.Losses.LogLoss.Low)} to {Words.Signed(shown.Losses.LogLoss.High)}."
                    : ".");
            bool isLess = shown.Losses.LogLoss.Value <= 0;
            double peak = (isLess ? shown.Better : shown.Worse).LogPeak, needed = Standings.NeededEValue(comparison.Variants.Length);
            yield return $"The evidence that it is {(isLess ? "better" : "worse")}, gathered label by label, reached an e-value of "
                + $"{Words.EValue(peak)}; with {Words.Of(comparison.Variants.Length, "variant", "variants")} tried, "
                + $"{Words.Count(needed)} is called strong."
                + (peak >= Math.Log(needed) && Standings.Of(shown, comparison.Variants.Length) == Standing.Unclear
                    ? " It was strong, but the interval of the whole recording holds 0, so the question stays open."
                    : "");
        }
        foreach (string caution in Cautions(result)) yield return caution;
    }

    /// <summary>The variant of which the report shows the most: the best that stands up, or else the one with the least log-loss.</summary>
    public static VariantComparison Shown(IReadOnlyList<VariantComparison> variants) => Best(variants) ?? variants.MinBy(v => v.Figures.LogLoss)!;

    private static VariantComparison? Best(IReadOnlyList<VariantComparison> variants) =>
        variants.Where(v => Standings.Of(v, variants.Count) == Standing.Better).MinBy(v => v.Figures.LogLoss);

    private static string? Baseline(BacktestResult result)
    {
        if (result.Baselines.IsEmpty) return null;
        var best = result.Baselines.MinBy(b => b.Comparison.Variants[0].Losses.LogLoss.Value)!;
        return Standings.Of(best.Comparison.Variants[0], result.Baselines.Length) switch
        {
            Standing.Better => $"The {best.Name} would have done better than the definition.",
            Standing.Worse => "The definition does better than every baseline.",
            _ => $"The definition and the {best.Name} cannot be told apart.",
        };
    }

    private static IEnumerable<string> Cautions(BacktestResult result)
    {
        var comparison = result.Comparison;
        if (!result.IsComplete) yield return "The replay was stopped before the end of the recordings. This covers what was replayed by then.";
        if (result.Reference.Health.TaughtAtOnce > 0)
            yield return $"{Words.Share((double)result.Reference.Health.TaughtAtOnce / result.Reference.Health.Labelled)} of the labels stand in their events and taught at once. "
                + "Where labels come later in truth, this result is optimistic.";
        if (result.LabelsLeftOut > 0)
            yield return $"{Words.Of(result.LabelsLeftOut, "label was", "labels were")} left out of the comparison, because not every variant learned "
                + "the same label at the same record.";
        if (result.RivalUnusable > 0)
            yield return $"{Words.Of(result.RivalUnusable, "event", "events")} held no number from 0 to 1 in the rival's field.";
        if (comparison.Blocks < 10) yield return $"There are only {Words.Of(comparison.Blocks, "block", "blocks")} of time, so that the intervals are rough.";
    }
}
