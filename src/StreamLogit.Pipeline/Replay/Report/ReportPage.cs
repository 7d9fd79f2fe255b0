using StreamLogit.Pipeline.Replay.Backtest;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>The report of a backtest: one HTML page that opens from disk, loads nothing and runs no script.</summary>
public static class ReportPage
{
    private const int MostCurves = 5;

    /// <summary>Writes the page.</summary>
    /// <param name="result">What the backtest gave.</param>
    /// <param name="stream">The name of the stream.</param>
    /// <param name="version">The version of the program.</param>
    public static string Write(BacktestResult result, string stream, string version)
    {
        var html = new HtmlText();
        html.Markup("<!doctype html>\n<html lang=\"en\"><head><meta charset=\"utf-8\"><meta http-equiv=\"Content-Security-Policy\" content=\"").Text(ReportStyle.Policy)
            .Markup("\"><meta name=\"viewport\" content=\"width=device-width, initial-scale=1\"><title>").Text($"Replay of {stream}")
            .Markup("</title><style>").Markup(ReportStyle.Css).Markup("</style></head><body><header>");
        html.Element("p", $"Replay of {stream}").Element("h1", Verdict.Headline(result)).Markup("</header><main>");
        foreach (string paragraph in Verdict.Paragraphs(result)) html.Element("p", paragraph);

        var comparison = result.Comparison;
        bool hasVariants = !comparison.Variants.IsEmpty && comparison.Count > 0;
        int shown = hasVariants ? comparison.Variants.IndexOf(Verdict.Shown(comparison.Variants)) : 0;
        html.Markup("<h2>What was tried</h2>");
        ReportTables.Variants(html, result);
        ReportTables.OtherMeasures(html, result);
        html.Element("p", "The standing is “better” or “worse” only where the e-value has been 20 times the number of variants and the interval agrees. The cost "
            + $"counts a false alarm as {Words.Ratio(result.Reference.Decisions.Cutoff)} and a miss as {Words.Ratio(1 - result.Reference.Decisions.Cutoff)}, the costs "
            + "for which the definition’s cutoff is best; alerts, precision and recall go by each definition’s own cutoff.");
        if (!result.Baselines.IsEmpty)
        {
            html.Markup("<h2>What else could have been used</h2>");
            ReportTables.Baselines(html, result);
        }
        if (hasVariants) WriteTimes(html, result, shown);
        if (comparison.Count > 0) WriteReliability(html, result, hasVariants ? shown : null);
        if (hasVariants && !comparison.Slices.IsEmpty)
        {
            html.Markup("<h2>Slice by slice</h2>");
            ReportTables.Slices(html, comparison, shown);
        }
        WriteProvenance(html, result, version, hasVariants ? shown : null);
        return html.Markup("</main><footer><p>Written by streamlogit ").Text(version).Markup(". This page loads nothing and runs no script.</p></footer></body></html>\n").ToString();
    }

    private static void WriteTimes(HtmlText html, BacktestResult result, int shown)
    {
        var comparison = result.Comparison;
        int[] best =
        [
            // Those that lose much would press all others together at the top.
            .. Enumerable.Range(0, comparison.Variants.Length)
                .Where(v => v == shown || Standings.Of(comparison.Variants[v], comparison.Variants.Length) != Standing.Worse).OrderBy(v => comparison.Variants[v].Figures.LogLoss).Take(MostCurves),
        ];
        html.Markup("<h2>When it helps and when it hurts</h2><figure>");
        CurveChart.Draw(html, comparison, shown, best);
        html.Markup("<figcaption>Nats of log-loss gained on the definition as it stands, added up day by day. <span class=\"key-after\">The thick line</span> is ")
            .Text(comparison.Variants[shown].Name).Markup(best.Length > 1 ? "; thin lines are the other best variants.</figcaption></figure>" : ".</figcaption></figure>");

        var days = comparison.Days.Where(day => double.IsFinite(day.Variants[shown].LogLoss)).ToList();
        int helped = days.Count(day => day.Variants[shown].LogLoss < 0), hurt = days.Count(day => day.Variants[shown].LogLoss > 0);
        var most = days.MinBy(day => day.Variants[shown].LogLoss * day.Count);
        var least = days.MaxBy(day => day.Variants[shown].LogLoss * day.Count);
        if (most is null || least is null) return;
        html.Element("p", $"It lost less on {Words.Of(helped, "day", "days")} and more on {Words.Of(hurt, "day", "days")}. It helped most on {Words.Day(most.StartMicroseconds)} "
            + $"({Words.Signed(most.Variants[shown].LogLoss)} a label) and hurt most on {Words.Day(least.StartMicroseconds)} ({Words.Signed(least.Variants[shown].LogLoss)} a label).");
        html.Markup("<details><summary>Day by day</summary>");
        ReportTables.Days(html, comparison, shown);
        html.Markup("</details>");
    }

    private static void WriteReliability(HtmlText html, BacktestResult result, int? shown)
    {
        html.Markup("<h2>Do the probabilities come true?</h2><div class=\"pair\"><figure>");
        ReliabilityChart.Draw(html, result.Reference.Decisions, shown is int v ? result.Variants[v].Decisions : null);
        html.Markup("<figcaption>Observed rate against mean probability, on scales of log-odds. <span class=\"key-before\">Rings: as it stands.</span>");
        if (shown is not null) html.Markup(" <span class=\"key-after\">Squares: ").Text(result.Variants[shown.Value].Name).Markup(".</span>");
        html.Markup("</figcaption></figure><div>");
        ReportTables.Reliability(html, "the definition as it stands", result.Reference.Decisions);
        if (shown is not null) ReportTables.Reliability(html, result.Variants[shown.Value].Name, result.Variants[shown.Value].Decisions);
        html.Markup("</div></div>");
    }

    private static void WriteProvenance(HtmlText html, BacktestResult result, string version, int? shown)
    {
        html.Markup("<h2>How to get the same bits again</h2><dl>");
        foreach (var recording in result.Recordings)
        {
            html.Markup("<dt>recording</dt><dd>").Text(recording.Path).Text(recording.Bytes is long bytes ? $", {Words.Count(bytes)} bytes" : "").Markup("</dd>");
            html.Markup("<dt>its SHA-256</dt><dd><code>").Text(recording.Sha256 ?? "not known").Markup("</code></dd>");
        }
        if (result.Span is { } span) html.Markup("<dt>only records</dt><dd>").Text(Words.Span(span)).Markup("</dd>");
        if (result.LabelDelayMicroseconds > 0) html.Markup("<dt>delay of labels</dt><dd>").Text(Words.Duration(result.LabelDelayMicroseconds)).Markup("</dd>");
        html.Markup("<dt>score hash</dt><dd><code>").Text(result.Reference.ScoreHash).Markup("</code></dd>");
        if (shown is int v)
            html.Markup("<dt>score hash of ").Text(result.Variants[v].Name).Markup("</dt><dd><code>").Text(result.Variants[v].ScoreHash).Markup("</code></dd>");
        html.Markup("<dt>events, labels, rejects</dt><dd>")
            .Text($"{Words.Count(result.Reference.Health.Events)}, {Words.Count(result.Reference.Health.Labelled)}, {Words.Count(result.Reference.Health.Rejected)}")
            .Markup("</dd><dt>blocks of the bootstrap</dt><dd>")
            .Text($"{Words.Count(result.Comparison.Blocks)} of {Words.Duration(result.Comparison.BlockMicroseconds)}")
            .Markup("</dd><dt>passes</dt><dd>").Text(Words.Count(result.Passes)).Markup("</dd><dt>program</dt><dd>streamlogit ").Text(version).Markup("</dd></dl>");
        html.Markup("<details><summary>The definition, with all that overrode it</summary><pre tabindex=\"0\">").Text(result.Reference.EffectiveJson).Markup("</pre></details>");
        if (result.Variants.IsEmpty) return;
        html.Markup("<details><summary>Score hashes of all variants</summary><dl>");
        foreach (var variant in result.Variants) html.Markup("<dt>").Text(variant.Name).Markup("</dt><dd><code>").Text(variant.ScoreHash).Markup("</code></dd>");
        html.Markup("</dl></details>");
    }
}
