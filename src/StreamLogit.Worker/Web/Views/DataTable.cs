using System.Collections.Immutable;
using System.Text.Json;

namespace StreamLogit.Worker.Web.Views;

/// <summary>
/// Figures as a table. The page draws its curves from it and shows it beside them; JSON and CSV give the same cells. A cell is text, a whole number, a number, or null.
/// </summary>
/// <param name="name">Its name in addresses.</param>
/// <param name="title">What it shows.</param>
/// <param name="columns">Its columns.</param>
internal sealed class DataTable(string name, string title, params ImmutableArray<DataColumn> columns)
{
    private readonly List<object?[]> _rows = [];

    public string Name => name;

    public string Title => title;

    public ImmutableArray<DataColumn> Columns => columns;

    public IReadOnlyList<IReadOnlyList<object?>> Rows => _rows;

    /// <summary>Adds a row with a cell for each column.</summary>
    public void Add(params object?[] cells)
    {
        if (cells.Length != columns.Length) throw new ArgumentException($"{name} has {columns.Length} columns, not {cells.Length}.", nameof(cells));
        _rows.Add(cells);
    }

    /// <summary>A time as a cell.</summary>
    public static string? Time(long? microseconds) => microseconds is { } time ? DateTimeOffset.UnixEpoch.AddMicroseconds(time).ToString("yyyy-MM-dd'T'HH:mm:ss.FFFFFF'Z'", null) : null;

    /// <summary>Writes title, columns and rows as a JSON object.</summary>
    public void Write(Utf8JsonWriter json)
    {
        json.WriteStartObject();
        json.WriteString("title", title);
        json.WriteStartArray("columns");
        foreach (var column in columns)
        {
            json.WriteStartObject();
            json.WriteString("key", column.Key);
            json.WriteString("title", column.Title);
            json.WriteString("kind", JsonNamingPolicy.CamelCase.ConvertName(column.Kind.ToString()));
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartArray("rows");
        foreach (object?[] row in _rows)
        {
            json.WriteStartArray();
            foreach (object? cell in row) WriteCell(json, cell);
            json.WriteEndArray();
        }
        json.WriteEndArray();
        json.WriteEndObject();
    }

    private static void WriteCell(Utf8JsonWriter json, object? cell)
    {
        switch (cell)
        {
            case string text: json.WriteStringValue(text); break;
            case long whole: json.WriteNumberValue(whole); break;
            case int whole: json.WriteNumberValue(whole); break;
            case double number when double.IsFinite(number): json.WriteNumberValue(number); break;
            default: json.WriteNullValue(); break;
        }
    }
}
