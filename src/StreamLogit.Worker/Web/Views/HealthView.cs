using System.Buffers;
using System.Collections.Immutable;
using System.Text.Json;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Pipeline;

namespace StreamLogit.Worker.Web.Views;

/// <summary>Everything that the page shows of one snapshot for one choice.</summary>
internal sealed class HealthView
{
    private readonly EngineDefinition _definition;
    private readonly HealthSnapshot _health;
    private readonly LoopProgress _progress;
    private readonly ViewChoice _choice;
    private readonly Selection _selection;

    public HealthView(EngineDefinition definition, HealthSnapshot health, LoopProgress progress, ViewChoice choice)
    {
        (_definition, _health, _progress, _choice) = (definition, health, progress, choice);
        _selection = Selection.Of(health, definition.Health, choice);
        var curve = Curves.Of(_selection.History, definition.Health.History, choice.Past, health.ClockMicroseconds ?? 0, health.Settings.Length);
        Verdict = Verdict.Of(_selection.Figures, _selection.Words, health.Awaiting);
        Tables =
        [
            CurveTables.Promised(curve),
            CurveTables.LogLoss(curve),
            FigureTables.Reliability(_selection.Figures),
            FigureTables.Drift(_selection),
            FigureTables.Delays(_selection.Stream ?? health.Stream),
            CurveTables.Stream(choice.Slice.Length == 0 ? curve : Curves.Of(health.History, definition.Health.History, choice.Past, health.ClockMicroseconds ?? 0, health.Settings.Length)),
            CurveTables.Blend(choice.Slice.Length == 0 ? curve : Curves.Of(health.History, definition.Health.History, choice.Past, health.ClockMicroseconds ?? 0, health.Settings.Length), health.Settings),
            FigureTables.Settings(_selection),
            FigureTables.Windows(health, choice),
            FigureTables.Slices(health, definition.Health, choice),
            NoticeTables.Alarms(health),
            NoticeTables.AlarmChanges(health),
            NoticeTables.Changes(health),
            NoticeTables.Rejects(health, _selection),
        ];
    }

    /// <summary>What stands at the top.</summary>
    public Verdict Verdict { get; }

    /// <summary>Every curve and table.</summary>
    public ImmutableArray<DataTable> Tables { get; }

    /// <summary>The view as JSON, UTF-8.</summary>
    public byte[] ToJson(long number)
    {
        var buffer = new ArrayBufferWriter<byte>(1 << 15);
        using (var json = new Utf8JsonWriter(buffer)) Write(json, number);
        return buffer.WrittenSpan.ToArray();
    }

    private void Write(Utf8JsonWriter json, long number)
    {
        json.WriteStartObject();
        json.WriteNumber("number", number);
        json.WriteString("stream", _definition.Stream);
        json.WriteString("clock", DataTable.Time(_health.ClockMicroseconds));
        json.WriteString("window", _selection.Words);
        json.WriteNumber("cutoff", _definition.Decision.Cutoff);
        json.WriteString("notice", _choice.Notice);
        json.WriteStartObject("choice");
        json.WriteString("window", _choice.Window);
        json.WriteString("slice", _choice.Slice);
        json.WriteString("past", _choice.Past.Name);
        json.WriteEndObject();
        WriteChoices(json);
        json.WriteStartObject("verdict");
        json.WriteString("standing", JsonNamingPolicy.CamelCase.ConvertName(Verdict.Standing.ToString()));
        json.WriteString("title", Verdict.Title);
        json.WriteString("sentence", Verdict.Sentence);
        json.WriteEndObject();
        json.WriteStartArray("findings");
        foreach (var finding in Findings.Of(_health, _selection))
        {
            json.WriteStartObject();
            json.WriteBoolean("notable", finding.IsNotable);
            json.WriteString("text", finding.Text);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartArray("facts");
        foreach (var fact in Facts.Of(_health, _selection))
        {
            json.WriteStartObject();
            json.WriteString("name", fact.Name);
            json.WriteString("value", fact.Value);
            json.WriteString("note", fact.Note);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        WriteProgress(json);
        json.WriteStartObject("tables");
        foreach (var table in Tables)
        {
            json.WritePropertyName(table.Name);
            table.Write(json);
        }
        json.WriteEndObject();
        json.WriteEndObject();
    }

    private void WriteChoices(Utf8JsonWriter json)
    {
        var health = _definition.Health;
        var windows = health.Windows.Select(w => (w.Name, $"last {Wording.LastWindow(w.LengthMicroseconds)}"));
        if (_choice.Slice.Length == 0) windows = windows.Append((ViewChoice.LastLabels, $"last {Wording.Count(health.LastLabels)} labels"));
        json.WriteStartObject("choices");
        WriteOptions(json, "window", windows.Append((ViewChoice.All, "since the start")));
        WriteOptions(json, "slice", _health.Slices.Select(s => (ViewChoice.NameOf(s), s.Value is null ? $"{s.Field}: all others" : $"{s.Field}: {s.Value}")).Prepend(("", "the whole stream")));
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

    private void WriteProgress(Utf8JsonWriter json)
    {
        json.WriteStartObject("progress");
        json.WriteNumber("records", _health.Records);
        json.WriteNumber("rejected", _health.Rejected);
        json.WriteNumber("labelled", _health.Labelled);
        json.WriteNumber("commits", _progress.Commits);
        if (_progress.Source.TotalBytes is > 0 and var total) json.WriteNumber("sourceShare", Math.Min(1, (double)_progress.Source.Bytes / total));
        json.WriteEndObject();
    }
}
