using StreamLogit.Pipeline.Replay.Backtest;
using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>The tables of the report. Each can be scrolled sideways, by keyboard too.</summary>
internal static class ReportTables
{
    private const int MostDays = 400;
    private const string None = "–";

    public static void Variants(HtmlText html, BacktestResult result)
    {
        var comparison = result.Comparison;
        Begin(
            html, "wide", $"The definition as it stands and {Words.Of(comparison.Variants.Length, "variant", "variants")}, the lowest log-loss first, on the same "
            + $"{Words.Of(comparison.Count, "label", "labels")}. A difference below 0 means that the variant loses less. Intervals hold the lasting difference "
            + $"{comparison.Level * 100:0} % of the time.",
            "Definition", "Standing", "Log-loss", "Difference", "Interval", "e-value now", "e-value at its peak");
        html.Markup("<tr><th scope=\"row\">as it stands</th>");
        Cells(html, None, Words.Mean(comparison.Reference.LogLoss), None, None, None, None);
        html.Markup("</tr>");
        foreach (var variant in comparison.Variants.OrderBy(v => v.Figures.LogLoss))
        {
            html.Markup("<tr><th scope=\"row\">").Text(variant.Name).Markup("</th>");
            StandingCell(html, Standings.Of(variant, comparison.Variants.Length));
            Cells(
                html, Words.Mean(variant.Figures.LogLoss), Words.Signed(variant.Losses.LogLoss.Value), Words.Interval(variant.Losses.LogLoss),
                Words.EValue(variant.Better.LogEValue), Words.EValue(variant.Better.LogPeak));
            html.Markup("</tr>");
        }
        End(html);
    }

    public static void OtherMeasures(HtmlText html, BacktestResult result)
    {
        var comparison = result.Comparison;
        Begin(
            html, "wide", "How well they tell ones from zeros, how far they are calibrated, and what their alerts came to, in the same order.",
            "Definition", "Brier", "AUC", "Interval of its difference", "Observed / expected", "Cost difference", "Alerts", "Precision", "Recall");
        Row(html, "as it stands", comparison.Reference, comparison.ObservedRate, null, result.Reference.Decisions);
        foreach (var (variant, lane) in comparison.Variants.Zip(result.Variants).OrderBy(pair => pair.First.Figures.LogLoss))
            Row(html, variant.Name, variant.Figures, comparison.ObservedRate, variant, lane.Decisions);
        End(html);
    }

    public static void Baselines(HtmlText html, BacktestResult result)
    {
        Begin(
            html, "wide", "What else could have been used, each against the definition as it stands on the labels for which it had a probability.",
            "Baseline", "Labels", "Standing", "Log-loss", "Log-loss as it stands", "Difference", "Interval", "AUC", "Observed / expected");
        foreach (var baseline in result.Baselines)
        {
            var comparison = baseline.Comparison;
            var variant = comparison.Variants[0];
            html.Markup("<tr><th scope=\"row\">").Text(baseline.Name).Markup("</th>");
            Cell(html, Words.Count(comparison.Count));
            StandingCell(html, Standings.Of(variant, 1));
            Cells(
                html, Words.Mean(variant.Figures.LogLoss), Words.Mean(comparison.Reference.LogLoss), Words.Signed(variant.Losses.LogLoss.Value),
                Words.Interval(variant.Losses.LogLoss), Words.Mean(variant.Figures.Auc), Words.Ratio(comparison.ObservedRate / variant.Figures.MeanProbability));
            html.Markup("</tr>");
        }
        End(html);
    }

    public static void Days(HtmlText html, ComparisonResult comparison, int shown)
    {
        var days = comparison.Days.Where(day => day.Count > 0).TakeLast(MostDays).ToList();
        Begin(
            html, "narrow", $"{(days.Count < comparison.Days.Length ? $"The last {MostDays} days" : "Every day")} on which events were scored whose labels are known. Below 0 the variant loses less.",
            "Day (UTC)", "Labels", "Observed rate", "Mean probability", "Log-loss as it stands", "Difference");
        foreach (var day in days)
        {
            html.Markup("<tr><th scope=\"row\">").Text(Words.Day(day.StartMicroseconds)).Markup("</th>");
            Cells(
                html, Words.Count(day.Count), Words.Mean(day.ObservedRate), Words.Mean(day.Reference.MeanProbability), Words.Mean(day.Reference.LogLoss),
                Words.Signed(day.Variants[shown].LogLoss));
            html.Markup("</tr>");
        }
        End(html);
    }

    public static void Slices(HtmlText html, ComparisonResult comparison, int shown)
    {
        Begin(html, "narrow", "Below 0 the variant loses less.", "Slice", "Labels", "Observed rate", "Log-loss as it stands", "Difference", "Interval");
        foreach (var slice in comparison.Slices)
        {
            var difference = slice.Variants[shown].LogLoss;
            html.Markup("<tr><th scope=\"row\">").Text(slice.Name).Markup("</th>");
            Cells(
                html, Words.Count(slice.Count), Words.Mean(slice.ObservedRate), Words.Mean(slice.Reference.LogLoss), Words.Signed(difference.Value),
                Words.Interval(difference));
            html.Markup("</tr>");
        }
        End(html);
    }

    public static void Reliability(HtmlText html, string name, DecisionFigures figures)
    {
        Begin(html, "narrow", $"Reliability of {name}", "Mean probability", "Observed rate", "Labels");
        foreach (var bin in ReliabilityChart.Gathered(figures))
        {
            html.Markup("<tr><th scope=\"row\">").Text(Words.Mean(bin.MeanProbability)).Markup("</th>");
            Cells(html, Words.Mean(bin.ObservedRate), Words.Count(bin.Count));
            html.Markup("</tr>");
        }
        End(html);
    }

    private static void Row(
        HtmlText html, string name, in ModelFigures figures, double observedRate, VariantComparison? variant, DecisionFigures decisions)
    {
        html.Markup("<tr><th scope=\"row\">").Text(name).Markup("</th>");
        Cells(
            html, Words.Mean(figures.Brier), Words.Mean(figures.Auc), variant is null ? None : Words.Interval(variant.Auc),
            Words.Ratio(observedRate / figures.MeanProbability), variant is null ? None : Words.Signed(variant.Losses.Cost.Value),
            Words.Count(decisions.Alerts), Words.Share(decisions.Precision), Words.Share(decisions.Recall));
        html.Markup("</tr>");
    }

    private static void StandingCell(HtmlText html, Standing standing) =>
        html.Markup(standing switch { Standing.Better => "<td class=\"better\">", Standing.Worse => "<td class=\"worse\">", _ => "<td>" })
            .Text(standing.Words()).Markup("</td>");

    private static void Begin(HtmlText html, string kind, string caption, params ReadOnlySpan<string> columns)
    {
        html.Markup($"<div class=\"scroll {kind}\" tabindex=\"0\" role=\"region\" aria-label=\"").Text(caption).Markup("\"><table>");
        html.Element("caption", caption).Markup("<thead><tr>");
        foreach (string column in columns) html.Markup("<th scope=\"col\">").Text(column).Markup("</th>");
        html.Markup("</tr></thead><tbody>");
    }

    private static void End(HtmlText html) => html.Markup("</tbody></table></div>");

    private static void Cells(HtmlText html, params ReadOnlySpan<string> texts)
    {
        foreach (string text in texts) Cell(html, text);
    }

    private static void Cell(HtmlText html, string text) => html.Element("td", text);
}
