using System.Text.Json;
using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Output;

/// <summary>Writes change detectors and alarms as members of a JSON object.</summary>
internal static class WatchJson
{
    public static void Write(Utf8JsonWriter json, HealthSnapshot health)
    {
        json.WriteStartArray("detectors");
        foreach (var detector in health.Detectors)
        {
            json.WriteStartObject();
            json.WriteString("name", detector.Name);
            json.WriteFigure("statistic", detector.Statistic);
            json.WriteFigure("threshold", detector.Threshold);
            json.WriteNumber("fired", detector.Fired);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartArray("changes");
        foreach (var change in health.Changes)
        {
            json.WriteStartObject();
            json.WriteString("detector", change.Detector);
            json.WriteNumber("at", change.AtMicroseconds);
            json.WriteNumber("since", change.SinceMicroseconds);
            json.WriteFigure("before", change.Before);
            json.WriteFigure("after", change.After);
            json.WriteString("sentence", change.Sentence);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartArray("alarms");
        foreach (var alarm in health.Alarms)
        {
            json.WriteStartObject();
            json.WriteString("name", alarm.Alarm.Name);
            json.WriteString("state", alarm.IsRaised ? "raised" : "quiet");
            if (alarm.SinceMicroseconds is { } since) json.WriteNumber("since", since);
            else json.WriteNull("since");
            json.WriteFigure("value", alarm.Value);
            json.WriteNumber("count", alarm.Count);
            json.WriteString("sentence", alarm.Sentence);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartArray("alarmChanges");
        foreach (var change in health.AlarmChanges)
        {
            json.WriteStartObject();
            json.WriteNumber("number", change.Number);
            json.WriteString("alarm", change.Name);
            json.WriteString("state", change.IsRaised ? "raised" : "quiet");
            json.WriteNumber("at", change.AtMicroseconds);
            json.WriteFigure("value", change.Value);
            json.WriteString("sentence", change.Sentence);
            json.WriteEndObject();
        }
        json.WriteEndArray();
    }
}
