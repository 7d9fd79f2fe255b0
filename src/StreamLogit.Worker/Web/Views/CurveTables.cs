using System.Collections.Immutable;
using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Web.Views;

/// <summary>The curves as tables.</summary>
internal static class CurveTables
{
    private const int MostSettings = 6;

    public static DataTable Promised(IReadOnlyList<CurvePoint> curve)
    {
        var table = new DataTable(
            "promised", "Bad outcomes, promised and happened",
            new("from", "from", ColumnKind.Time),
            new("labels", "labels", ColumnKind.Count),
            new("promised", "promised bad", ColumnKind.Amount),
            new("low80", "80 % from", ColumnKind.Amount),
            new("high80", "80 % to", ColumnKind.Amount),
            new("low95", "95 % from", ColumnKind.Amount),
            new("high95", "95 % to", ColumnKind.Amount),
            new("came", "came", ColumnKind.Amount));
        foreach (var point in curve)
        {
            var promised = point.Promised;
            table.Add(
                DataTable.Time(point.FromMicroseconds), point.Labels, promised.Expected, promised.Range80.Low, promised.Range80.High, promised.Range95.Low, promised.Range95.High,
                promised.Came);
        }
        return table;
    }

    public static DataTable LogLoss(IReadOnlyList<CurvePoint> curve)
    {
        var table = new DataTable(
            "log-loss", "Log-loss of what was published, against the base rate",
            new("from", "from", ColumnKind.Time),
            new("labels", "labels", ColumnKind.Count),
            new("logLoss", "log-loss (nats)", ColumnKind.Figure),
            new("baseRateLogLoss", "base rate", ColumnKind.Figure),
            new("ratio", "ratio", ColumnKind.Figure));
        foreach (var point in curve)
            table.Add(DataTable.Time(point.FromMicroseconds), point.Labels, point.LogLoss, point.BaseRateLogLoss, point.LogLoss / point.BaseRateLogLoss);
        return table;
    }

    public static DataTable Stream(IReadOnlyList<CurvePoint> curve)
    {
        var table = new DataTable(
            "stream", "What came",
            new("from", "from", ColumnKind.Time),
            new("events", "events", ColumnKind.Count),
            new("alerts", "alerts", ColumnKind.Count),
            new("alertRate", "alert rate", ColumnKind.Share),
            new("labels", "labels", ColumnKind.Count),
            new("meanDelaySeconds", "mean delay of labels", ColumnKind.Seconds),
            new("rejects", "rejects", ColumnKind.Count));
        foreach (var point in curve)
        {
            table.Add(
                DataTable.Time(point.FromMicroseconds), point.Events, point.Alerts, (double)point.Alerts / point.Events, point.Labels, point.MeanDelaySeconds, point.Rejects);
        }
        return table;
    }

    /// <summary>The weights of the settings that lead now, and of all others together.</summary>
    public static DataTable Blend(IReadOnlyList<CurvePoint> curve, ImmutableArray<SettingFigures> settings)
    {
        int[] leading = [.. Enumerable.Range(0, settings.Length).OrderByDescending(i => settings[i].BlendWeight).Take(MostSettings)];
        bool hasOthers = settings.Length > leading.Length;
        var columns = ImmutableArray.CreateBuilder<DataColumn>();
        columns.Add(new("from", "from", ColumnKind.Time));
        var names = SettingNames.Shorten([.. settings.Select(setting => setting.Name)]);
        foreach (int i in leading) columns.Add(new(settings[i].Name, names[i], ColumnKind.Share));
        if (hasOthers) columns.Add(new("others", "all others", ColumnKind.Share));
        var table = new DataTable("blend", "Weights in the blend", columns.ToImmutable());
        foreach (var point in curve)
        {
            object?[] cells = [DataTable.Time(point.FromMicroseconds), .. leading.Select(i => (object)point.BlendWeight(i))];
            table.Add(hasOthers ? [.. cells, 1 - leading.Sum(point.BlendWeight)] : cells);
        }
        return table;
    }
}
