using StreamLogit.Engine.Health;

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
        yield return new Fact("Alerts that were bad", Wording.Share(alerts.Precision), $"of {Wording.Count(alerts.Count)}; 95 % {Wording.Share(alerts.PrecisionInterval.Low)} to {Wording.Share(alerts.PrecisionInterval.High)}");
        yield return new Fact("Bad that were alerts", Wording.Share(alerts.Recall), $"95 % {Wording.Share(alerts.RecallInterval.Low)} to {Wording.Share(alerts.RecallInterval.High)}");
        if (selection.Stream is { } stream)
            yield return new Fact("Events", Wording.Count(stream.Events), $"{Wording.Share(stream.AlertRate)} alerts");
    }
}
