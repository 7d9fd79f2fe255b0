using System.Buffers;
using System.Text.Json;

namespace StreamLogit.Worker.Web.Views;

/// <summary>A view as JSON, which the page draws.</summary>
internal static class HealthViewJson
{
    /// <summary>The view as UTF-8.</summary>
    /// <param name="view">The view.</param>
    /// <param name="number">The number of its frame.</param>
    public static byte[] Of(HealthView view, long number)
    {
        var buffer = new ArrayBufferWriter<byte>(1 << 15);
        using (var json = new Utf8JsonWriter(buffer)) Write(json, view, number);
        return buffer.WrittenSpan.ToArray();
    }

    private static void Write(Utf8JsonWriter json, HealthView view, long number)
    {
        json.WriteStartObject();
        json.WriteNumber("number", number);
        json.WriteString("stream", view.Definition.Stream);
        json.WriteString("clock", DataTable.Time(view.Moment.Health.ClockMicroseconds));
        json.WriteString("window", view.Selection.Words);
        json.WriteNumber("cutoff", view.Definition.Decision.Cutoff);
        json.WriteString("notice", view.Choice.Notice);
        json.WriteStartObject("choice");
        json.WriteString("window", view.Choice.Window);
        json.WriteString("slice", view.Choice.Slice);
        json.WriteString("past", view.Choice.Past.Name);
        json.WriteEndObject();
        WriteChoices(json, view);
        json.WriteStartObject("verdict");
        json.WriteString("standing", JsonNamingPolicy.CamelCase.ConvertName(view.Verdict.Standing.ToString()));
        json.WriteString("title", view.Verdict.Title);
        json.WriteString("sentence", view.Verdict.Sentence);
        json.WriteEndObject();
        json.WriteStartArray("findings");
        if (view.Verdict.Note is { } note) WriteFinding(json, new Finding(view.Verdict.Standing == Standing.Broken, note));
        foreach (var finding in Findings.Of(view.Moment.Health, view.Selection)) WriteFinding(json, finding);
        json.WriteEndArray();
        json.WriteStartArray("facts");
        foreach (var fact in Facts.Of(view.Moment.Health, view.Selection))
        {
            json.WriteStartObject();
            json.WriteString("name", fact.Name);
            json.WriteString("value", fact.Value);
            json.WriteString("note", fact.Note);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        WriteProgress(json, view);
        json.WriteStartObject("tables");
        foreach (var table in view.Tables)
        {
            json.WritePropertyName(table.Name);
            table.Write(json);
        }
        json.WriteEndObject();
        json.WriteEndObject();
    }

    private static void WriteFinding(Utf8JsonWriter json, Finding finding)
    {
        json.WriteStartObject();
        json.WriteBoolean("notable", finding.IsNotable);
        json.WriteString("text", finding.Text);
        json.WriteEndObject();
    }

    private static void WriteChoices(Utf8JsonWriter json, HealthView view)
    {
        var health = view.Definition.Health;
        var windows = health.Windows.Select(w => (w.Name, $"last {Wording.LastWindow(w.LengthMicroseconds)}"));
        if (view.Choice.Slice.Length == 0) windows = windows.Append((ViewChoice.LastLabels, $"last {Wording.Count(health.LastLabels)} labels"));
        json.WriteStartObject("choices");
        WriteOptions(json, "window", windows.Append((ViewChoice.All, "since the start")));
        WriteOptions(json, "slice", view.Moment.Health.Slices.Select(s => (ViewChoice.NameOf(s), s.Value is null ? $"{s.Field}: all others" : $"{s.Field}: {s.Value}")).Prepend(("", "the whole stream")));
        WriteOptions(json, "past", PastSpan.All.Select(p => (p.Name, p.Text)));
        json.WriteEndObject();
    }

    private static void WriteOptions(Utf8JsonWriter json, string name, IEnumerable<(string Value, string Text)> options)
    {
        json.WriteStartArray(name);
        foreach (var (value, text) in options)
        {
            json.WriteStartArray();
            json.WriteStringValue(value);
            json.WriteStringValue(text);
            json.WriteEndArray();
        }
        json.WriteEndArray();
    }

    private static void WriteProgress(Utf8JsonWriter json, HealthView view)
    {
        json.WriteStartObject("progress");
        json.WriteNumber("records", view.Moment.Health.Records);
        json.WriteNumber("rejected", view.Moment.Health.Rejected);
        json.WriteNumber("labelled", view.Moment.Health.Labelled);
        json.WriteNumber("commits", view.Moment.Progress.Commits);
        if (view.Moment.Progress.Source.TotalBytes is > 0 and var total) json.WriteNumber("sourceShare", Math.Min(1, (double)view.Moment.Progress.Source.Bytes / total));
        json.WriteEndObject();
    }
}
