using System.Text.Json;
using StreamLogit.Pipeline.Replay.Backtest;
using StreamLogit.Pipeline.Replay.Comparison;
using StreamLogit.Pipeline.Replay.Report;

namespace StreamLogit.Worker.Output;

/// <summary>Writes what a backtest found as members of a JSON object.</summary>
internal static class BacktestJson
{
    public static void Write(Utf8JsonWriter json, BacktestResult result)
    {
        var comparison = result.Comparison;
        json.WriteBoolean("complete", result.IsComplete);
        json.WriteStartObject("comparison");
        json.WriteNumber("labels", comparison.Count);
        json.WriteNumber("labelsLeftOut", result.LabelsLeftOut);
        json.WriteNumber("labelsAtOnce", result.Reference.Health.TaughtAtOnce);
        json.WriteNumber("level", comparison.Level);
        json.WriteNumber("blocks", comparison.Blocks);
        json.WriteNumber("blockSeconds", comparison.BlockMicroseconds / 1e6);
        json.WriteNumber("passes", result.Passes);
        json.WriteEndObject();
        json.WriteStartObject("reference");
        WriteFigures(json, comparison.Reference, comparison.ObservedRate, result.Reference.Decisions);
        json.WriteEndObject();
        json.WriteStartArray("variants");
        foreach (var (variant, lane) in comparison.Variants.Zip(result.Variants))
        {
            json.WriteStartObject();
            WriteVariant(json, variant, comparison.ObservedRate, lane.Decisions, comparison.Variants.Length);
            json.WriteString("scoreHash", lane.ScoreHash);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartArray("baselines");
        foreach (var baseline in result.Baselines)
        {
            json.WriteStartObject();
            json.WriteNumber("labels", baseline.Comparison.Count);
            json.WriteFigure("referenceLogLoss", baseline.Comparison.Reference.LogLoss);
            WriteVariant(json, baseline.Comparison.Variants[0], baseline.Comparison.ObservedRate, baseline.Decisions, tried: 1);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        WriteDays(json, comparison);
        json.WriteStartArray("recordings");
        foreach (var recording in result.Recordings)
        {
            json.WriteStartObject();
            json.WriteString("path", recording.Path);
            if (recording.Bytes is long bytes) json.WriteNumber("bytes", bytes);
            else json.WriteNull("bytes");
            json.WriteString("sha256", recording.Sha256);
            json.WriteEndObject();
        }
        json.WriteEndArray();
    }

    private static void WriteVariant(Utf8JsonWriter json, VariantComparison variant, double observedRate, DecisionFigures decisions, int tried)
    {
        json.WriteString("name", variant.Name);
        json.WriteString("standing", Standings.Of(variant, tried).Words());
        WriteFigures(json, variant.Figures, observedRate, decisions);
        json.WriteStartObject("difference");
        WriteDifference(json, "logLoss", variant.Losses.LogLoss);
        WriteDifference(json, "brier", variant.Losses.Brier);
        WriteDifference(json, "cost", variant.Losses.Cost);
        WriteDifference(json, "auc", variant.Auc);
        json.WriteEndObject();
        WriteEvidence(json, "better", variant.Better);
        WriteEvidence(json, "worse", variant.Worse);
    }

    private static void WriteFigures(Utf8JsonWriter json, in ModelFigures figures, double observedRate, DecisionFigures decisions)
    {
        json.WriteFigure("logLoss", figures.LogLoss);
        json.WriteFigure("brier", figures.Brier);
        json.WriteFigure("auc", figures.Auc);
        json.WriteFigure("cost", figures.Cost);
        json.WriteFigure("meanProbability", figures.MeanProbability);
        json.WriteFigure("observedOverExpected", observedRate / figures.MeanProbability);
        json.WriteFigure("cutoff", decisions.Cutoff);
        json.WriteFigure("alerts", decisions.Alerts);
        json.WriteFigure("precision", decisions.Precision);
        json.WriteFigure("recall", decisions.Recall);
    }

    private static void WriteDifference(Utf8JsonWriter json, string name, in Difference difference)
    {
        json.WriteStartObject(name);
        json.WriteFigure("value", difference.Value);
        json.WriteFigure("low", difference.Low);
        json.WriteFigure("high", difference.High);
        json.WriteEndObject();
    }

    private static void WriteEvidence(Utf8JsonWriter json, string name, in Evidence evidence)
    {
        json.WriteStartObject(name);
        json.WriteFigure("logEValue", evidence.LogEValue);
        json.WriteFigure("logPeak", evidence.LogPeak);
        json.WriteEndObject();
    }

    private static void WriteDays(Utf8JsonWriter json, ComparisonResult comparison)
    {
        json.WriteStartArray("days");
        foreach (var day in comparison.Days)
        {
            json.WriteStartObject();
            json.WriteString("start", DateTime.UnixEpoch.AddMicroseconds(day.StartMicroseconds));
            json.WriteNumber("labels", day.Count);
            json.WriteFigure("observedRate", day.ObservedRate);
            json.WriteFigure("logLoss", day.Reference.LogLoss);
            json.WriteFigure("meanProbability", day.Reference.MeanProbability);
            json.WriteStartArray("logLossDifferences");
            foreach (var variant in day.Variants)
            {
                if (double.IsFinite(variant.LogLoss)) json.WriteNumberValue(variant.LogLoss);
                else json.WriteNullValue();
            }
            json.WriteEndArray();
            json.WriteEndObject();
        }
        json.WriteEndArray();
    }
}
