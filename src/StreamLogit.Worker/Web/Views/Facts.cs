using System.Globalization;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Worker.Web.Views;

/// <summary>The figures that stand by themselves below the verdict.</summary>
internal static class Facts
{
    private const double TwoSided95 = 1.96;

    public static IEnumerable<Fact> Of(HealthSnapshot health, Selection selection)
    {
        var figures = selection.Figures;
        yield return new Fact("Labels", Wording.Count(figures.Count), $"{Wording.Count(health.Awaiting)} awaited");
        yield return new Fact("Log-loss", Wording.Figure(figures.LogLoss), $"base rate {Wording.Figure(figures.BaseRateLogLoss)}");
        var area = figures.Scores.RocArea;
        yield return new Fact("Ranking (AUC)", Wording.Ratio(area.Area), $"95 % {Wording.Ratio(area.DeLongInterval.Low)} to {Wording.Ratio(area.DeLongInterval.High)}");
        var calibration = figures.Scores.Calibration;
        yield return new Fact("Calibration slope", Wording.Ratio(calibration.Slope), $"± {Wording.Ratio(TwoSided95 * calibration.SlopeStandardError)}; 1 is right");
        var alerts = figures.Alerts;
        yield return new Fact("Alerts that were bad", Wording.Share(alerts.Precision), $"of {Wording.Count(alerts.Count)}; {Interval(alerts.PrecisionInterval)}");
        yield return new Fact("Bad that were alerts", Wording.Share(alerts.Recall), Interval(alerts.RecallInterval));
        if (selection.Stream is { } stream)
            yield return new Fact("Events", Wording.Count(stream.Events), $"{Wording.Share(stream.AlertRate)} alerts");
    }

    private static string Interval(Interval shares) => double.IsFinite(shares.Low)
        ? string.Create(CultureInfo.InvariantCulture, $"95 % {shares.Low * 100:0.#} to {shares.High * 100:0.#} %")
        : "no interval yet";
}
