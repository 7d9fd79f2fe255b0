using StreamLogit.Engine.Health;
using StreamLogit.Pipeline;

namespace StreamLogit.Worker.Web.Views;

/// <summary>What was noticed, as tables: alarms, changes, rejects.</summary>
internal static class NoticeTables
{
    public static DataTable Alarms(HealthSnapshot health)
    {
        var table = new DataTable(
            "alarms", "Alarms",
            new("alarm", "alarm", ColumnKind.Text),
            new("state", "state", ColumnKind.Text),
            new("since", "since", ColumnKind.Time),
            new("value", "value", ColumnKind.Figure),
            new("bound", "bound", ColumnKind.Figure),
            new("sentence", "in words", ColumnKind.Text));
        foreach (var alarm in health.Alarms.OrderByDescending(a => a.IsRaised))
            table.Add(alarm.Alarm.Name, alarm.IsRaised ? "raised" : "quiet", DataTable.Time(alarm.SinceMicroseconds), alarm.Value, alarm.Alarm.Bound, alarm.Sentence);
        return table;
    }

    public static DataTable AlarmChanges(HealthSnapshot health)
    {
        var table = new DataTable(
            "alarm-changes", "When alarms were raised and fell quiet",
            new("at", "at", ColumnKind.Time),
            new("alarm", "alarm", ColumnKind.Text),
            new("state", "became", ColumnKind.Text),
            new("value", "value", ColumnKind.Figure),
            new("sentence", "in words", ColumnKind.Text));
        foreach (var change in health.AlarmChanges)
            table.Add(DataTable.Time(change.AtMicroseconds), change.Name, change.IsRaised ? "raised" : "quiet", change.Value, change.Sentence);
        return table;
    }

    public static DataTable Changes(HealthSnapshot health)
    {
        var table = new DataTable(
            "changes", "Changes that the detectors found",
            new("at", "found", ColumnKind.Time),
            new("since", "since about", ColumnKind.Time),
            new("detector", "detector", ColumnKind.Text),
            new("before", "before", ColumnKind.Figure),
            new("after", "after", ColumnKind.Figure),
            new("sentence", "in words", ColumnKind.Text));
        foreach (var change in health.Changes)
            table.Add(DataTable.Time(change.AtMicroseconds), DataTable.Time(change.SinceMicroseconds), change.Detector, change.Before, change.After, change.Sentence);
        return table;
    }

    public static DataTable RejectExamples(IEnumerable<RejectExample> examples)
    {
        var table = new DataTable(
            "reject-examples", "Examples of rejects",
            new("reason", "reason", ColumnKind.Text),
            new("position", "where", ColumnKind.Text),
            new("detail", "what is wrong", ColumnKind.Text),
            new("record", "the record", ColumnKind.Text));
        foreach (var example in examples) table.Add(example.Reason, example.Position, example.Detail, example.Record);
        return table;
    }

    public static DataTable Rejects(HealthSnapshot health, Selection selection)
    {
        var table = new DataTable(
            "rejects", "Rejects by reason",
            new("reason", "reason", ColumnKind.Text),
            new("recently", "in the window", ColumnKind.Count),
            new("records", "since the start", ColumnKind.Count));
        foreach (var (reason, records) in health.RejectsByReason.OrderByDescending(r => r.Value))
            table.Add(reason, selection.Stream is { } stream ? stream.RejectsByReason.GetValueOrDefault(reason) : null, records);
        return table;
    }
}
