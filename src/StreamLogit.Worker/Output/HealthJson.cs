using System.Collections.Immutable;
using System.Text.Json;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Cohorts;

namespace StreamLogit.Worker.Output;

/// <summary>Writes how published probabilities did, as JSON. Times are microseconds since 1970 on the stream's clock; what cannot be told is null.</summary>
internal static class HealthJson
{
    private static readonly double[] DelayShares = [0.1, 0.5, 0.9, 0.99];

    /// <summary>Writes the health as an object.</summary>
    public static void Write(Utf8JsonWriter json, HealthSnapshot health)
    {
        json.WriteStartObject();
        WriteCounts(json, health);
        json.WriteStartArray("windows");
        json.WriteStartObject();
        json.WriteString("name", "all");
        FiguresJson.Write(json, health.Total);
        WriteStream(json, health.Stream);
        json.WriteEndObject();
        foreach (var window in health.Windows) WriteWindow(json, window);
        json.WriteEndArray();
        json.WriteStartArray("slices");
        foreach (var slice in health.Slices)
        {
            json.WriteStartObject();
            json.WriteString("field", slice.Field);
            json.WriteString("value", slice.Value);
            FiguresJson.Write(json, slice.Total);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        WriteCohorts(json, health.Cohorts);
        json.WriteStartObject("byLabelTime");
        WritePoints(json, "hours", health.History.Hours);
        WritePoints(json, "days", health.History.Days);
        json.WriteEndObject();
        WatchJson.Write(json, health);
        json.WriteEndObject();
    }

    private static void WriteCounts(Utf8JsonWriter json, HealthSnapshot health)
    {
        if (health.ClockMicroseconds is { } clock) json.WriteNumber("clock", clock);
        else json.WriteNull("clock");
        json.WriteNumber("records", health.Records);
        json.WriteNumber("events", health.Events);
        json.WriteNumber("labelled", health.Labelled);
        json.WriteNumber("awaiting", health.Awaiting);
        json.WriteNumber("expired", health.Expired);
        json.WriteNumber("thinned", health.Thinned);
        json.WriteNumber("repeated", health.Repeated);
        json.WriteNumber("corrected", health.Corrected);
        json.WriteNumber("early", health.Early);
        json.WriteStartObject("rejects");
        foreach (var (reason, records) in health.RejectsByReason) json.WriteNumber(reason, records);
        json.WriteEndObject();
    }

    private static void WriteWindow(Utf8JsonWriter json, WindowFigures window)
    {
        json.WriteStartObject();
        json.WriteString("name", window.Name);
        if (window.FromMicroseconds is { } from) json.WriteNumber("from", from);
        FiguresJson.Write(json, window.Figures);
        if (window.Stream is { } stream) WriteStream(json, stream);
        if (!window.Settings.IsEmpty) FiguresJson.WriteSettings(json, window.Settings);
        if (window.Drift is { } drift)
        {
            json.WriteStartArray("drift");
            foreach (var feature in drift.Features)
            {
                json.WriteStartObject();
                json.WriteString("feature", feature.Feature);
                json.WriteFigure("psi", feature.Psi);
                json.WriteFigure("psiByChance", feature.PsiByChance);
                json.WriteFigure("missingShare", feature.MissingShare);
                json.WriteFigure("unseenShare", feature.UnseenShare);
                json.WriteEndObject();
            }
            json.WriteEndArray();
        }
        json.WriteEndObject();
    }

    private static void WriteStream(Utf8JsonWriter json, StreamFigures stream)
    {
        json.WriteStartObject("stream");
        json.WriteNumber("events", stream.Events);
        json.WriteNumber("alerts", stream.Alerts);
        json.WriteFigure("promised", stream.Promised);
        json.WriteNumber("rejects", stream.Rejects);
        json.WriteNumber("expired", stream.Expired);
        json.WriteNumber("corrections", stream.Corrections);
        json.WriteNumber("lateLabels", stream.LateLabels);
        json.WriteFigure("meanDelaySeconds", stream.MeanDelaySeconds);
        json.WriteStartArray("delayQuantiles");
        foreach (double share in DelayShares)
        {
            json.WriteStartObject();
            json.WriteNumber("share", share);
            json.WriteFigure("seconds", stream.LabelDelays.QuantileSeconds(share));
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteEndObject();
    }

    private static void WriteCohorts(Utf8JsonWriter json, CohortFigures cohorts)
    {
        json.WriteStartArray("labelledByAge");
        foreach (var age in cohorts.ByAge)
        {
            json.WriteStartObject();
            json.WriteNumber("fromSeconds", age.FromMicroseconds / 1_000_000);
            json.WriteNumber("toSeconds", age.ToMicroseconds / 1_000_000);
            json.WriteNumber("events", age.Events);
            json.WriteFigure("share", age.Share);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartObject("byEventTime");
        WriteEvents(json, "hours", cohorts.Hours);
        WriteEvents(json, "days", cohorts.Days);
        json.WriteEndObject();
    }

    private static void WriteEvents(Utf8JsonWriter json, string name, ImmutableArray<EventCohort> cohorts)
    {
        json.WriteStartArray(name);
        foreach (var cohort in cohorts)
        {
            json.WriteStartObject();
            json.WriteNumber("from", cohort.FromMicroseconds);
            json.WriteNumber("events", cohort.Events);
            json.WriteFigure("labelledShare", cohort.LabelledShare);
            json.WriteFigure("logLoss", cohort.LogLoss);
            json.WriteFigure("baseRateLogLoss", cohort.BaseRateLogLoss);
            json.WriteFigure("meanProbability", cohort.MeanProbability);
            json.WriteFigure("observedRate", cohort.ObservedRate);
            json.WriteEndObject();
        }
        json.WriteEndArray();
    }

    private static void WritePoints(Utf8JsonWriter json, string name, ImmutableArray<HistoryPoint> points)
    {
        json.WriteStartArray(name);
        foreach (var point in points)
        {
            json.WriteStartObject();
            json.WriteNumber("from", point.FromMicroseconds);
            json.WriteNumber("labels", point.Figures.Count);
            json.WriteFigure("logLoss", point.Figures.LogLoss);
            json.WriteFigure("baseRateLogLoss", point.Figures.BaseRateLogLoss);
            json.WriteFigure("meanProbability", point.Figures.MeanProbability);
            json.WriteFigure("observedRate", point.Figures.ObservedRate);
            FiguresJson.WriteSettings(json, point.Settings);
            json.WriteEndObject();
        }
        json.WriteEndArray();
    }
}
