using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Drift;

namespace StreamLogit.Worker.Web.Views;

/// <summary>The figures that a choice selects from a snapshot.</summary>
/// <param name="Window">The window's name in links.</param>
/// <param name="Slice">The slice's name in links, or empty for the whole stream.</param>
/// <param name="Words">The window in words that stand behind figures: <c>in the last 7 days</c>.</param>
/// <param name="Figures">The figures of the labels.</param>
/// <param name="Stream">What happened on the stream, or null where that is not told apart.</param>
/// <param name="Settings">The settings of the bank.</param>
/// <param name="Drift">How features drifted, or null where that is not told apart.</param>
/// <param name="DriftWords">Over which window.</param>
/// <param name="History">How the figures went over time.</param>
internal sealed record Selection(
    string Window, string Slice, string Words, HealthFigures Figures, StreamFigures? Stream, ImmutableArray<SettingFigures> Settings, DriftFigures? Drift, string DriftWords, HealthHistory History)
{
    public static Selection Of(HealthSnapshot health, HealthOptions options, ViewChoice choice)
    {
        var slice = ViewChoice.Find(health, choice.Slice);
        var window = options.Windows.FirstOrDefault(w => w.Name == choice.Window);
        var ofStream = window is null ? null : health.Windows.FirstOrDefault(w => w.Name == window.Name);
        // Drift is compared over windows of time only: those without one show the longest.
        var longest = options.Windows.MaxBy(w => w.LengthMicroseconds)!;
        var ofDrift = ofStream ?? health.Windows.FirstOrDefault(w => w.Name == longest.Name);
        string driftWords = $"in the last {Wording.LastWindow((window ?? longest).LengthMicroseconds)}";
        string words = window is not null ? driftWords
            : choice.Window == ViewChoice.LastLabels ? $"among the last {Wording.Count(options.LastLabels)} labels"
            : "since the stream began";
        if (slice is not null)
        {
            var ofSlice = window is null ? null : slice.Windows.FirstOrDefault(w => w.Name == window.Name);
            return new Selection(choice.Window, choice.Slice, words, ofSlice?.Figures ?? slice.Total, null, health.Settings, ofDrift?.Drift, driftWords, slice.History);
        }
        if (choice.Window == ViewChoice.LastLabels)
            return new Selection(choice.Window, "", words, health.Windows[^1].Figures, null, health.Settings, ofDrift?.Drift, driftWords, health.History);
        return new Selection(
            choice.Window, "", words, ofStream?.Figures ?? health.Total, ofStream?.Stream ?? health.Stream, ofStream?.Settings ?? health.Settings, ofDrift?.Drift, driftWords, health.History);
    }
}
