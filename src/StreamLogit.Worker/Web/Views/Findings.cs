using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Drift;

namespace StreamLogit.Worker.Web.Views;

/// <summary>What stands below the verdict: one plain sentence for each thing that may matter.</summary>
internal static class Findings
{
    private const int MostFeatures = 3;

    // In standard deviations, with one outcome more for what is rare. Among 250 slices that all hold, about one in ten times some slice strays so far.
    private const double FarSlice = 3.5;

    private const long NewMicroseconds = 7L * 86_400_000_000;

    // By the convention of credit scoring, where the index comes from.
    private const double Some = 0.1, Much = 0.25;

    public static IEnumerable<Finding> Of(HealthSnapshot health, Selection selection)
    {
        var raised = health.Alarms.Where(alarm => alarm.IsRaised).ToList();
        foreach (var alarm in raised) yield return new Finding(true, $"Alarm since {Wording.Time(alarm.SinceMicroseconds ?? 0)}: {alarm.Sentence}");
        if (selection.Figures.Count > 0) yield return LogLoss(selection.Figures);
        if (WorstSlice(health, selection) is { } slice) yield return slice;
        if (Change(health) is { } change) yield return change;
        if (Drift(selection) is { } drift) yield return drift;
        if (Delay(health, selection) is { } delay) yield return delay;
        if (Rejects(selection) is { } rejects) yield return rejects;
        if (raised.Count == 0)
            yield return new Finding(false, health.Alarms.IsEmpty ? "The definition has no alarms." : $"{Wording.Of(health.Alarms.Length, "alarm is", "alarms are")} watched, none is raised.");
    }

    private static Finding LogLoss(HealthFigures figures)
    {
        double ratio = figures.LogLossRatio;
        var interval = figures.LogLossInterval;
        string numbers = $"{Wording.Figure(figures.LogLoss)} (95 % {Wording.Figure(interval.Low)} to {Wording.Figure(interval.High)}) against {Wording.Figure(figures.BaseRateLogLoss)}";
        return ratio < 1
            ? new Finding(false, $"Scores take {Wording.Share(1 - ratio)} off the base rate's log-loss: {numbers}.")
            : new Finding(true, $"The log-loss is above that of the mere base rate: {numbers}.");
    }

    /// <summary>The slice whose labels stray farthest, if that is more than what the worst of many does by chance.</summary>
    private static Finding? WorstSlice(HealthSnapshot health, Selection selection)
    {
        if (selection.Window == ViewChoice.LastLabels) return null; // slices have windows of time only
        var (name, promised, distance) = health.Slices
            .Select(slice => (Name: ViewChoice.NameOf(slice), (slice.Windows.FirstOrDefault(w => w.Name == selection.Window)?.Figures ?? slice.Total).Promised))
            .Select(slice => (slice.Name, slice.Promised, Distance: Math.Abs(slice.Promised.Came - slice.Promised.Expected) / Math.Sqrt(slice.Promised.Variance + 1)))
            .DefaultIfEmpty().MaxBy(slice => slice.Distance);
        if (name is null || name == selection.Slice || !(distance > FarSlice)) return null;
        return new Finding(true, $"Where {name}: {Wording.Amount(promised.Expected)} bad outcomes were promised {selection.Words}, {Wording.Amount(promised.Came)} came.");
    }

    private static Finding? Change(HealthSnapshot health)
    {
        if (health.Changes.IsEmpty) return null;
        var latest = health.Changes[0];
        long ago = (health.ClockMicroseconds ?? latest.AtMicroseconds) - latest.AtMicroseconds;
        return new Finding(ago < NewMicroseconds, $"The latest change was found {Wording.Duration(ago / 1e6)} ago, {Wording.Time(latest.AtMicroseconds)}: {latest.Sentence}");
    }

    private static Finding? Drift(Selection selection)
    {
        if (selection.Drift is not { } drift || drift.Features.All(f => double.IsNaN(f.Psi))) return null;
        var moved = drift.Features.Where(f => f.Psi > f.PsiByChance95 && f.Psi >= Some).ToList();
        if (moved.Count == 0) return new Finding(false, $"No feature moved much {selection.DriftWords}.");
        string names = string.Join(", ", moved.Take(MostFeatures).Select(f => $"{f.Feature} ({Wording.Ratio(f.Psi)})"));
        string more = moved.Count > MostFeatures ? $" and {moved.Count - MostFeatures} more" : "";
        return new Finding(moved.Any(IsLarge), $"Moved {selection.DriftWords}, beyond chance: {names}{more}.");
    }

    private static bool IsLarge(FeatureDrift feature) => feature.Psi >= Much;

    private static Finding? Delay(HealthSnapshot health, Selection selection)
    {
        string waiting = $"{Wording.Of(health.Awaiting, "event waits for its label", "events wait for their labels")}";
        if (selection.Stream?.LabelDelays is not { Bins.IsEmpty: false } delays) return health.Awaiting > 0 ? new Finding(false, $"{waiting}.") : null;
        return new Finding(
            false, $"{waiting}. Half of those that came late {selection.Words} took up to {Wording.Duration(delays.QuantileSeconds(0.5))}, nine in ten up to {Wording.Duration(delays.QuantileSeconds(0.9))}.");
    }

    private static Finding? Rejects(Selection selection)
    {
        if (selection.Stream is not { Rejects: > 0 } stream) return null;
        string reason = stream.RejectsByReason.IsEmpty ? "" : $", most of them {stream.RejectsByReason.MaxBy(r => r.Value).Key}";
        return new Finding(stream.RejectShare > 0.01, $"{Wording.Of(stream.Rejects, "record was", "records were")} rejected {selection.Words} ({Wording.Share(stream.RejectShare)}){reason}.");
    }
}
