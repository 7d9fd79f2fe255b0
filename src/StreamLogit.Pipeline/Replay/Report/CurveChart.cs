using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Replay.Report;

/// <summary>Draws, over the days, what a variant gained on the reference in log-loss, added up: it rises where the variant helps.</summary>
internal static class CurveChart
{
    private const double Width = 860, Height = 250, Left = 64, Right = 12, Top = 14, Bottom = 30;
    private const int MostPoints = 800;
    private static readonly double[] Steps = [1, 2, 5, 10];

    public static void Draw(HtmlText html, ComparisonResult comparison, int shown, IReadOnlyList<int> others)
    {
        var days = comparison.Days;
        var lines = others.Where(v => v != shown).Prepend(shown).Select(v => Gains(comparison, v)).ToList();
        double low = Math.Min(0, lines.Min(line => line.Min())), high = Math.Max(0, lines.Max(line => line.Max()));
        if (high - low < 1e-12) high = low + 1;
        double X(int day) => Left + (days.Length == 1 ? 1 : (double)day / (days.Length - 1)) * (Width - Left - Right);
        double Y(double value) => Top + (high - value) / (high - low) * (Height - Top - Bottom);

        html.Markup($"<svg viewBox=\"0 0 {Width} {Height}\" role=\"img\" aria-labelledby=\"curve-title curve-text\"><title id=\"curve-title\">");
        html.Text($"Gain in log-loss over time, added up, of {comparison.Variants[shown].Name}").Markup("</title><desc id=\"curve-text\">");
        html.Text($"From {Words.Day(days[0].StartMicroseconds)} to {Words.Day(days[^1].StartMicroseconds)} it gained {lines[0][^1]:F1} nats in all; "
            + $"at its highest {lines[0].Max():F1}, at its lowest {lines[0].Min():F1}.").Markup("</desc>");
        foreach (double tick in Ticks(low, high))
        {
            html.Markup($"<line class=\"{(tick == 0 ? "zero" : "grid")}\" x1=\"{Left}\" x2=\"{Width - Right}\" y1=\"").Number(Y(tick)).Markup("\" y2=\"")
                .Number(Y(tick)).Markup($"\"/><text class=\"tick end\" x=\"{Left - 8}\" y=\"").Number(Y(tick) + 4).Markup("\">").Text($"{tick:0.###;−0.###;0}").Markup("</text>");
        }
        foreach (int day in new[] { 0, days.Length / 2, days.Length - 1 }.Distinct())
        {
            string anchor = day == 0 ? "" : day == days.Length - 1 ? " end" : " middle";
            html.Markup($"<text class=\"tick{anchor}\" y=\"{Height - 8}\" x=\"").Number(X(day)).Markup("\">").Text(Words.Day(days[day].StartMicroseconds)).Markup("</text>");
        }
        for (int i = lines.Count - 1; i >= 0; i--)
        {
            html.Markup($"<polyline class=\"{(i == 0 ? "main" : "other")}\" points=\"");
            int step = Math.Max(1, days.Length / MostPoints);
            for (int day = 0; day < days.Length; day += step) html.Number(X(day)).Markup(",").Number(Y(lines[i][day])).Markup(" ");
            html.Number(X(days.Length - 1)).Markup(",").Number(Y(lines[i][^1])).Markup("\"/>");
        }
        html.Markup("</svg>");
    }

    private static double[] Gains(ComparisonResult comparison, int variant)
    {
        double sum = 0;
        return [.. comparison.Days.Select(day => double.IsFinite(day.Variants[variant].LogLoss) ? sum -= day.Variants[variant].LogLoss * day.Count : sum)];
    }

    private static IEnumerable<double> Ticks(double low, double high)
    {
        double rough = (high - low) / 4, power = Math.Pow(10, Math.Floor(Math.Log10(rough)));
        double step = Steps.First(factor => factor * power >= rough) * power;
        for (double tick = Math.Ceiling(low / step); tick * step <= high; tick++) yield return tick == 0 ? 0 : tick * step;
    }
}
