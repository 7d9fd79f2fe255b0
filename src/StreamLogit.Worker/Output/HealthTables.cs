using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Output;

/// <summary>Writes how published probabilities did, as tables; those that would be empty are left out.</summary>
internal static class HealthTables
{
    /// <summary>Writes all of them.</summary>
    public static void Write(HealthSnapshot health, Terminal terminal)
    {
        ResultTable?[] tables =
        [
            Counts(health),
            Windows(health),
            CalibrationTables.Windows(health),
            Settings(health),
            CalibrationTables.Slices(health),
            LabelTables.Delays(health),
            LabelTables.Ages(health),
            ChangeTables.Drift(health),
            ChangeTables.Changes(health),
            ChangeTables.Alarms(health),
            health.RejectsByReason.Count > 0 ? Rejects(health) : null,
        ];
        bool isFirst = true;
        foreach (var table in tables.OfType<ResultTable>())
        {
            if (!isFirst) terminal.Writer.WriteLine();
            table.Write(terminal);
            isFirst = false;
        }
    }

    private static ResultTable Counts(HealthSnapshot health)
    {
        var table = new ResultTable("counted", "number");
        table.Add("events", FigureText.Count(health.Events));
        table.Add("labelled", FigureText.Count(health.Labelled));
        table.Add("rejected", FigureText.Count(health.Rejected));
        table.Add("awaiting", FigureText.Count(health.Awaiting));
        if (health.AwaitingBytes > 0) table.Add("bytes of memory for kept events", FigureText.Count(health.AwaitingBytes));
        table.Add("expired", FigureText.Count(health.Expired));
        table.Add("thinned", FigureText.Count(health.Thinned));
        table.Add("labels repeated", FigureText.Count(health.Repeated));
        table.Add("labels corrected", FigureText.Count(health.Corrected));
        table.Add("labels before their event", FigureText.Count(health.Early));
        if (health.Histories.Lookups > 0)
        {
            table.Add("keys in memory", FigureText.Count(health.Histories.Keys));
            table.Add("keys put out", FigureText.Count(health.Histories.Evictions));
            table.Add("keys taken back", FigureText.Count(health.Histories.Misses));
        }
        return table;
    }

    private static ResultTable Windows(HealthSnapshot health)
    {
        var table = new ResultTable("window", "labels", "log-loss", "base rate log-loss", "Brier", "mean probability", "observed rate");
        foreach (var (name, figures) in health.Windows.Select(window => (window.Name, window.Figures)).Prepend(("all", health.Total)))
        {
            table.Add(
                name, FigureText.Count(figures.Count), FigureText.Mean(figures.LogLoss), FigureText.Mean(figures.BaseRateLogLoss),
                FigureText.Mean(figures.Brier), FigureText.Mean(figures.MeanProbability), FigureText.Mean(figures.ObservedRate));
        }
        return table;
    }

    private static ResultTable Settings(HealthSnapshot health)
    {
        var table = new ResultTable("setting", "log-loss", "Brier", "weight in the blend");
        foreach (var setting in health.Settings)
            table.Add(setting.Name, FigureText.Mean(setting.LogLoss), FigureText.Mean(setting.Brier), FigureText.Mean(setting.BlendWeight));
        return table;
    }

    private static ResultTable Rejects(HealthSnapshot health)
    {
        var table = new ResultTable("reject", "records");
        foreach (var (reason, records) in health.RejectsByReason) table.Add(reason, FigureText.Count(records));
        return table;
    }
}
