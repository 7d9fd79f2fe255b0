using StreamLogit.Pipeline.Replay.Backtest;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>Draws observed rates against probabilities on scales of log-odds, on which rare events have room. On the diagonal a probability means what it says.</summary>
internal static class ReliabilityChart
{
    private const double Size = 400, Left = 56, Right = 12, Top = 12, Bottom = 46;
    private static readonly double[] Ticks = [0.0001, 0.001, 0.01, 0.1, 0.5, 0.9, 0.99, 0.999, 0.9999];

    /// <param name="html">Where it goes.</param>
    /// <param name="before">The reference.</param>
    /// <param name="after">The variant, or null.</param>
    public static void Draw(HtmlText html, DecisionFigures before, DecisionFigures? after)
    {
        var points = Gathered(before);
        var others = after is null ? [] : Gathered(after);
        double[] all = [.. points.Concat(others).SelectMany(bin => new[] { bin.MeanProbability, bin.ObservedRate }).Where(p => p is > 0 and < 1).Select(Logit)];
        double low = Math.Max(-11, all.DefaultIfEmpty(-1).Min() - 0.5), high = Math.Min(11, all.DefaultIfEmpty(1).Max() + 0.5);
        double Place(double probability) => (Math.Clamp(Logit(probability), low, high) - low) / (high - low);
        double X(double probability) => Left + Place(probability) * (Size - Left - Right);
        double Y(double probability) => Size - Bottom - Place(probability) * (Size - Top - Bottom);

        html.Markup($"<svg class=\"square\" viewBox=\"0 0 {Size} {Size}\" role=\"img\" aria-labelledby=\"reliability-title reliability-text\">"
            + "<title id=\"reliability-title\">Reliability: observed rate against probability</title><desc id=\"reliability-text\">");
        html.Text("The table beside it holds the same figures. Points on the diagonal are well calibrated.").Markup("</desc>");
        foreach (double tick in Ticks.Where(tick => Logit(tick) >= low && Logit(tick) <= high))
        {
            html.Markup("<line class=\"grid\" x1=\"").Number(X(tick)).Markup("\" x2=\"").Number(X(tick)).Markup($"\" y1=\"{Top}\" y2=\"{Size - Bottom}\"/>");
            html.Markup("<line class=\"grid\" y1=\"").Number(Y(tick)).Markup("\" y2=\"").Number(Y(tick)).Markup($"\" x1=\"{Left}\" x2=\"{Size - Right}\"/>");
            html.Markup($"<text class=\"tick middle\" y=\"{Size - Bottom + 16}\" x=\"").Number(X(tick)).Markup("\">").Text($"{tick:0.####}").Markup("</text>");
            html.Markup($"<text class=\"tick end\" x=\"{Left - 6}\" y=\"").Number(Y(tick) + 4).Markup("\">").Text($"{tick:0.####}").Markup("</text>");
        }
        html.Markup($"<line class=\"zero\" x1=\"{Left}\" y1=\"{Size - Bottom}\" x2=\"{Size - Right}\" y2=\"{Top}\"/>");
        html.Markup($"<text class=\"tick middle\" x=\"{(Left + Size - Right) / 2}\" y=\"{Size - 8}\">mean probability</text>");
        foreach (var bin in points) html.Markup("<circle class=\"before\" r=\"5\" cx=\"").Number(X(bin.MeanProbability)).Markup("\" cy=\"").Number(Y(bin.ObservedRate)).Markup("\"/>");
        foreach (var bin in others)
            html.Markup("<rect class=\"after\" width=\"8\" height=\"8\" x=\"").Number(X(bin.MeanProbability) - 4).Markup("\" y=\"").Number(Y(bin.ObservedRate) - 4).Markup("\"/>");
        html.Markup("</svg>");
    }

    /// <summary>Neighbouring bins put together until each holds at least a twelfth of the labels or twenty of either label.</summary>
    public static List<ReliabilityBin> Gathered(DecisionFigures figures)
    {
        var gathered = new List<ReliabilityBin>();
        long total = figures.Reliability.Sum(bin => bin.Count), count = 0;
        double weight = 0, probability = 0, ones = 0;
        foreach (var bin in figures.Reliability)
        {
            count += bin.Count;
            weight += bin.Weight;
            probability += bin.Weight * bin.MeanProbability;
            ones += bin.Weight * bin.ObservedRate;
            if (count < total / 12.0 && Math.Min(ones, weight - ones) < 20) continue;
            gathered.Add(new ReliabilityBin(count, weight, probability / weight, ones / weight));
            (count, weight, probability, ones) = (0, 0, 0, 0);
        }
        if (count > 0) gathered.Add(new ReliabilityBin(count, weight, probability / weight, ones / weight));
        return gathered;
    }

    private static double Logit(double p) => Math.Log(p / (1 - p));
}
