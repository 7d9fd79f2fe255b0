using System.Collections.Immutable;
using System.Text.Json;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Worker.Output;

/// <summary>Writes figures over some labels as members of a JSON object.</summary>
internal static class FiguresJson
{
    public static void Write(Utf8JsonWriter json, HealthFigures figures)
    {
        var scores = figures.Scores;
        json.WriteNumber("labels", figures.Count);
        json.WriteFigure("weight", figures.Weight);
        json.WriteFigure("logLoss", figures.LogLoss);
        WriteInterval(json, "logLossInterval", figures.LogLossInterval);
        json.WriteFigure("baseRateLogLoss", figures.BaseRateLogLoss);
        json.WriteFigure("logLossRatio", figures.LogLossRatio);
        json.WriteFigure("brier", figures.Brier);
        json.WriteStartObject("brierDecomposition");
        json.WriteFigure("reliability", scores.BrierDecomposition.Reliability);
        json.WriteFigure("resolution", scores.BrierDecomposition.Resolution);
        json.WriteFigure("uncertainty", scores.BrierDecomposition.Uncertainty);
        json.WriteFigure("withinGroups", scores.BrierDecomposition.WithinGroups);
        json.WriteEndObject();
        json.WriteFigure("meanProbability", figures.MeanProbability);
        json.WriteFigure("observedRate", figures.ObservedRate);
        json.WriteFigure("promised", figures.Promised.Expected);
        json.WriteFigure("came", figures.Promised.Came);
        WriteInterval(json, "cameRange80", figures.Promised.Range80);
        json.WriteFigure("auc", scores.RocArea.Area);
        json.WriteFigure("aucErrorBound", scores.RocArea.ErrorBound);
        WriteInterval(json, "aucInterval", scores.RocArea.DeLongInterval);
        json.WriteFigure("calibrationIntercept", scores.Calibration.Intercept);
        json.WriteFigure("calibrationSlope", scores.Calibration.Slope);
        json.WriteFigure("calibrationError", scores.CalibrationError.Expected);
        json.WriteFigure("hosmerLemeshow", scores.HosmerLemeshow.Statistic);
        json.WriteFigure("spiegelhalterZ", figures.Spiegelhalter.Z);
        json.WriteFigure("precision", figures.Alerts.Precision);
        json.WriteFigure("recall", figures.Alerts.Recall);
        json.WriteFigure("alertRate", figures.Alerts.AlertRate);
        json.WriteStartArray("reliability");
        foreach (var group in scores.Reliability)
        {
            json.WriteStartObject();
            json.WriteFigure("labels", group.Weight);
            json.WriteFigure("meanProbability", group.MeanProbability);
            json.WriteFigure("observedRate", group.ObservedRate);
            json.WriteEndObject();
        }
        json.WriteEndArray();
    }

    public static void WriteSettings(Utf8JsonWriter json, ImmutableArray<SettingFigures> settings)
    {
        json.WriteStartArray("settings");
        foreach (var setting in settings)
        {
            json.WriteStartObject();
            json.WriteString("name", setting.Name);
            json.WriteFigure("logLoss", setting.LogLoss);
            json.WriteFigure("brier", setting.Brier);
            json.WriteFigure("blendWeight", setting.BlendWeight);
            json.WriteEndObject();
        }
        json.WriteEndArray();
    }

    private static void WriteInterval(Utf8JsonWriter json, string name, Interval interval)
    {
        json.WriteStartObject(name);
        json.WriteFigure("low", interval.Low);
        json.WriteFigure("high", interval.High);
        json.WriteEndObject();
    }
}
