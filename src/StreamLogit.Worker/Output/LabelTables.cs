using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Output;

/// <summary>Tables of how labels come.</summary>
internal static class LabelTables
{
    private static readonly double[] Shares = [0.1, 0.5, 0.9, 0.99];

    /// <summary>How long labels that came after their event took.</summary>
    public static ResultTable? Delays(HealthSnapshot health)
    {
        if (health.Stream.LateLabels == 0) return null;
        var table = new ResultTable(["label delay", "late labels", "mean", .. Shares.Select(FigureText.Percent)]);
        Add("all", health.Stream);
        foreach (var window in health.Windows)
            if (window.Stream is { } stream) Add(window.Name, stream);
        return table;

        void Add(string name, StreamFigures stream) => table.Add([
            name, FigureText.Count(stream.LateLabels), FigureText.Seconds(stream.MeanDelaySeconds),
            .. Shares.Select(share => FigureText.Seconds(stream.LabelDelays.QuantileSeconds(share))),
        ]);
    }

    /// <summary>How many events of each age have their label.</summary>
    public static ResultTable? Ages(HealthSnapshot health)
    {
        if (health.Cohorts.ByAge.IsEmpty) return null;
        var table = new ResultTable("age of events", "events", "share labelled");
        foreach (var age in health.Cohorts.ByAge)
            table.Add($"from {FigureText.Seconds(age.FromMicroseconds / 1e6)}", FigureText.Count(age.Events), FigureText.Mean(age.Share));
        return table;
    }
}
