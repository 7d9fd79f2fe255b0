using System.Globalization;
using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Output;

/// <summary>Tables of what changed: drift, detected changes and alarms.</summary>
internal static class ChangeTables
{
    private const int MostRows = 10;

    /// <summary>The features that moved most, over the longest window.</summary>
    public static ResultTable? Drift(HealthSnapshot health)
    {
        if (health.Reference is not { IsComplete: true } || health.Windows.LastOrDefault(window => window.Drift is not null) is not { Drift: { } drift } longest) return null;
        var table = new ResultTable($"drift over {longest.Name}", "PSI", "by chance up to", "missing", "unseen");
        foreach (var feature in drift.Features.Take(MostRows))
        {
            table.Add(
                feature.Feature, FigureText.Number(feature.Psi), FigureText.Number(feature.PsiByChance95), FigureText.Mean(feature.MissingShare),
                FigureText.Mean(feature.UnseenShare));
        }
        return table;
    }

    /// <summary>The changes that were found last.</summary>
    public static ResultTable? Changes(HealthSnapshot health)
    {
        if (health.Changes.IsEmpty) return null;
        var table = new ResultTable("change found", "detector", "since", "what");
        foreach (var change in health.Changes.Take(MostRows)) table.Add(Time(change.AtMicroseconds), change.Detector, Time(change.SinceMicroseconds), change.Sentence);
        return table;
    }

    /// <summary>How the alarms stand.</summary>
    public static ResultTable? Alarms(HealthSnapshot health)
    {
        if (health.Alarms.IsEmpty) return null;
        var table = new ResultTable("alarm", "state", "since", "what");
        foreach (var alarm in health.Alarms) table.Add(alarm.Alarm.Name, alarm.IsRaised ? "raised" : "quiet", Time(alarm.SinceMicroseconds), alarm.Sentence);
        return table;
    }

    private static string Time(long? microseconds) =>
        microseconds is { } time ? DateTime.UnixEpoch.AddMicroseconds(time).ToString("yyyy-MM-dd'T'HH:mm:ss'Z'", CultureInfo.InvariantCulture) : "-";
}
