using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Web.Views;

/// <summary>The figures of now as tables.</summary>
internal static class FigureTables
{
    private const int ReliabilityGroups = 10;
    private const double WidestAge = 7.0 / 6;

    private static readonly ImmutableArray<DataColumn> CalibrationColumns =
        [new("calibrationIntercept", "intercept", ColumnKind.Figure), new("calibrationSlope", "slope", ColumnKind.Figure)];

    public static DataTable Reliability(HealthFigures figures)
    {
        var table = new DataTable(
            "reliability", "Promised against happened, by probability",
            new("promisedShare", "promised", ColumnKind.Share),
            new("cameShare", "came", ColumnKind.Share),
            new("low95", "95 % from", ColumnKind.Share),
            new("high95", "95 % to", ColumnKind.Share),
            new("weight", "labels", ColumnKind.Amount),
            new("promised", "promised bad", ColumnKind.Amount),
            new("came", "came bad", ColumnKind.Amount));
        foreach (var group in figures.Scores.ReliabilityByExpected(ReliabilityGroups))
        {
            var interval = group.ObservedInterval;
            table.Add(group.MeanProbability, group.ObservedRate, interval.Low, interval.High, group.Weight, group.Expected, group.Positive);
        }
        return table;
    }

    public static DataTable Drift(Selection selection)
    {
        var table = new DataTable(
            "drift", "How far values moved from the reference period",
            new("feature", "feature", ColumnKind.Text),
            new("psi", "stability index", ColumnKind.Figure),
            new("byChance", "by chance, mean", ColumnKind.Figure),
            new("byChance95", "chance exceeds 1 in 20", ColumnKind.Figure),
            new("missing", "missing", ColumnKind.Share),
            new("missingBefore", "missing before", ColumnKind.Share),
            new("unseen", "never seen", ColumnKind.Share),
            new("unseenBefore", "never seen before", ColumnKind.Share));
        foreach (var feature in selection.Drift?.Features ?? [])
        {
            table.Add(
                feature.Feature, feature.Psi, feature.PsiByChance, feature.PsiByChance95, feature.MissingShare, feature.ReferenceMissingShare, feature.UnseenShare,
                feature.ReferenceUnseenShare);
        }
        return table;
    }

    /// <summary>How many of the labels had come after a time.</summary>
    public static DataTable Delays(StreamFigures stream)
    {
        var table = new DataTable(
            "delays", "How long labels take",
            new("afterSeconds", "within", ColumnKind.Seconds),
            new("labels", "labels by then", ColumnKind.Count),
            new("share", "share of labels", ColumnKind.Share));
        double sum = 0, total = stream.LabelDelays.Bins.Sum(bin => bin.Labels);
        foreach (var (seconds, labels) in stream.LabelDelays.Bins)
        {
            sum += labels;
            table.Add(seconds.High, (long)sum, sum / total);
        }
        return table;
    }

    /// <summary>How many of the events of an age have their label: ages that differ by a sixth or less stand together.</summary>
    public static DataTable LabelledByAge(HealthSnapshot health)
    {
        var table = new DataTable(
            "labelled-by-age", "How many events have their label, by age",
            new("olderSeconds", "older than", ColumnKind.Seconds),
            new("youngerSeconds", "younger than", ColumnKind.Seconds),
            new("events", "events", ColumnKind.Count),
            new("labelled", "with their label", ColumnKind.Amount),
            new("share", "share", ColumnKind.Share));
        long from = 0, events = 0;
        double labelled = 0;
        var ages = health.Cohorts.ByAge;
        for (int i = 0; i < ages.Length; i++)
        {
            events += ages[i].Events;
            labelled += ages[i].Labelled;
            if (ages[i].ToMicroseconds < from * WidestAge && i < ages.Length - 1) continue;
            if (events > 0) table.Add(from / 1e6, ages[i].ToMicroseconds / 1e6, events, labelled, labelled / events);
            (from, events, labelled) = (ages[i].ToMicroseconds, 0, 0);
        }
        return table;
    }

    public static DataTable Settings(Selection selection)
    {
        var table = new DataTable(
            "settings", "The bank",
            new("setting", "setting", ColumnKind.Text),
            new("weight", "weight in the blend", ColumnKind.Share),
            new("logLoss", "log-loss (nats)", ColumnKind.Figure),
            new("brier", "Brier score", ColumnKind.Figure));
        foreach (var setting in selection.Settings.OrderByDescending(s => s.BlendWeight)) table.Add(setting.Name, setting.BlendWeight, setting.LogLoss, setting.Brier);
        return table;
    }

    public static DataTable Windows(HealthSnapshot health, ViewChoice choice)
    {
        var table = Labels("windows", "All windows", "window", "window", withCalibration: true);
        var windows = ViewChoice.Find(health, choice.Slice)?.Windows ?? health.Windows;
        var total = ViewChoice.Find(health, choice.Slice)?.Total ?? health.Total;
        foreach (var (name, figures) in windows.Select(w => (w.Name, w.Figures)).Append(("since the start", total))) AddLabels(table, name, figures, withCalibration: true);
        return table;
    }

    public static DataTable Slices(HealthSnapshot health, HealthOptions options, ViewChoice choice)
    {
        var table = Labels("slices", "Slices", "slice", "slice", withCalibration: false);
        int window = Enumerable.Range(0, options.Windows.Length).FirstOrDefault(i => options.Windows[i].Name == choice.Window, -1);
        foreach (var slice in health.Slices) AddLabels(table, ViewChoice.NameOf(slice), window < 0 ? slice.Total : slice.Windows[window].Figures, withCalibration: false);
        return table;
    }

    // Calibration is fitted, which takes too long to be done for hundreds of slices every second.
    private static DataTable Labels(string name, string title, string firstKey, string firstTitle, bool withCalibration) => new(
        name, title,
        [
            new(firstKey, firstTitle, ColumnKind.Text),
            new("labels", "labels", ColumnKind.Count),
            new("promised", "promised bad", ColumnKind.Amount),
            new("low80", "80 % from", ColumnKind.Amount),
            new("high80", "80 % to", ColumnKind.Amount),
            new("came", "came", ColumnKind.Amount),
            new("logLoss", "log-loss", ColumnKind.Figure),
            new("logLossRatio", "ratio to base rate", ColumnKind.Figure),
            new("brier", "Brier", ColumnKind.Figure),
            new("auc", "AUC", ColumnKind.Figure),
            new("precision", "precision", ColumnKind.Share),
            new("recall", "recall", ColumnKind.Share),
            .. withCalibration ? CalibrationColumns : [],
        ]);

    private static void AddLabels(DataTable table, string name, HealthFigures figures, bool withCalibration)
    {
        var promised = figures.Promised;
        object?[] cells =
        [
            name, figures.Count, promised.Expected, promised.Range80.Low, promised.Range80.High, promised.Came, figures.LogLoss, figures.LogLossRatio, figures.Brier,
            figures.Scores.RocArea.Area, figures.Alerts.Precision, figures.Alerts.Recall,
        ];
        table.Add(withCalibration ? [.. cells, figures.Scores.Calibration.Intercept, figures.Scores.Calibration.Slope] : cells);
    }
}
