using System.Globalization;
using StreamLogit.Pipeline.Replay.Backtest;
using StreamLogit.Pipeline.Replay.Comparison;
using StreamLogit.Pipeline.Replay.Report;

namespace StreamLogit.Worker.Output;

/// <summary>Writes what a backtest found as tables: the reference first, then variants by their log-loss.</summary>
internal static class BacktestTables
{
    public static void Write(BacktestResult result, Terminal terminal)
    {
        var comparison = result.Comparison;
        if (comparison.Variants.Length > 0)
        {
            var table = Table("variant");
            AddReference(table, comparison, result.Reference.Decisions);
            foreach (var (variant, lane) in comparison.Variants.Zip(result.Variants).OrderBy(pair => pair.First.Figures.LogLoss))
                Add(table, comparison, variant, lane.Decisions, comparison.Variants.Length);
            terminal.Writer.WriteLine();
            table.Write(terminal);
        }
        if (result.Baselines.Length == 0) return;
        var baselines = Table("baseline");
        foreach (var baseline in result.Baselines) Add(baselines, baseline.Comparison, baseline.Comparison.Variants[0], baseline.Decisions, tried: 1);
        terminal.Writer.WriteLine();
        baselines.Write(terminal);
    }

    private static ResultTable Table(string first) => new(
        first, "labels", "log-loss", "less reference", "low", "high", "Brier", "AUC", "observed/expected", "alerts", "precision", "recall", "log e-value",
        "standing");

    private static void AddReference(ResultTable table, ComparisonResult comparison, DecisionFigures decisions) => table.Add(
        "(as it stands)", FigureText.Count(comparison.Count), FigureText.Mean(comparison.Reference.LogLoss), "-", "-", "-",
        FigureText.Mean(comparison.Reference.Brier), FigureText.Mean(comparison.Reference.Auc), Calibration(comparison, comparison.Reference),
        Count(decisions.Alerts), FigureText.Mean(decisions.Precision), FigureText.Mean(decisions.Recall), "-", "-");

    private static void Add(ResultTable table, ComparisonResult comparison, VariantComparison variant, DecisionFigures decisions, int tried) => table.Add(
        variant.Name, FigureText.Count(comparison.Count), FigureText.Mean(variant.Figures.LogLoss), FigureText.Mean(variant.Losses.LogLoss.Value),
        FigureText.Mean(variant.Losses.LogLoss.Low), FigureText.Mean(variant.Losses.LogLoss.High), FigureText.Mean(variant.Figures.Brier),
        FigureText.Mean(variant.Figures.Auc), Calibration(comparison, variant.Figures), Count(decisions.Alerts), FigureText.Mean(decisions.Precision),
        FigureText.Mean(decisions.Recall), variant.Better.LogEValue.ToString("F1", CultureInfo.InvariantCulture), Standings.Of(variant, tried).Words());

    private static string Calibration(ComparisonResult comparison, in ModelFigures figures) => FigureText.Mean(comparison.ObservedRate / figures.MeanProbability);

    private static string Count(double weight) => weight.ToString("0.##", CultureInfo.InvariantCulture);
}
