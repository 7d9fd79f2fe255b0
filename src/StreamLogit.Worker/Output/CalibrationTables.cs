using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Output;

/// <summary>Tables of calibration, discrimination and decisions.</summary>
internal static class CalibrationTables
{
    private static readonly string[] Figures =
    [
        "promised", "came", "came / promised", "intercept", "slope", "calibration error", "Spiegelhalter Z", "AUC", "precision", "recall", "alert rate",
    ];

    /// <summary>Over all labels and every window.</summary>
    public static ResultTable? Windows(HealthSnapshot health)
    {
        if (health.Labelled == 0) return null;
        var table = new ResultTable(["calibration", .. Figures]);
        table.Add(["all", .. Cells(health.Total)]);
        foreach (var window in health.Windows) table.Add([window.Name, .. Cells(window.Figures)]);
        return table;
    }

    /// <summary>Of every slice, since it has figures of its own.</summary>
    public static ResultTable? Slices(HealthSnapshot health)
    {
        if (health.Slices.IsEmpty) return null;
        var table = new ResultTable(["slice", "value", "labels", "log-loss", "base rate log-loss", .. Figures]);
        foreach (var slice in health.Slices)
        {
            var total = slice.Total;
            table.Add([
                slice.Field, slice.Value ?? "(all others)", FigureText.Count(total.Count), FigureText.Mean(total.LogLoss), FigureText.Mean(total.BaseRateLogLoss), .. Cells(total),
            ]);
        }
        return table;
    }

    private static string[] Cells(HealthFigures figures)
    {
        var scores = figures.Scores;
        return
        [
            FigureText.Number(figures.Promised.Expected),
            FigureText.Number(figures.Promised.Came),
            FigureText.Number(figures.Promised.ObservedToExpected),
            FigureText.Number(scores.Calibration.Intercept),
            FigureText.Number(scores.Calibration.Slope),
            FigureText.Mean(scores.CalibrationError.Expected),
            FigureText.Number(figures.Spiegelhalter.Z),
            FigureText.Mean(scores.RocArea.Area),
            FigureText.Mean(figures.Alerts.Precision),
            FigureText.Mean(figures.Alerts.Recall),
            FigureText.Mean(figures.Alerts.AlertRate),
        ];
    }
}
