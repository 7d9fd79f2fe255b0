using System.Buffers;
using Spectre.Console;

namespace StreamLogit.Worker.Output;

/// <summary>A table of results: drawn on a terminal, tab-separated with a header line elsewhere.</summary>
internal sealed class ResultTable(params string[] columns)
{
    private static readonly SearchValues<char> Breaking = SearchValues.Create("\t\r\n");

    private readonly List<string[]> _rows = [];

    /// <summary>Adds a row with a cell for every column.</summary>
    public void Add(params string[] cells) => _rows.Add(cells);

    /// <summary>Writes the table.</summary>
    public void Write(Terminal terminal)
    {
        if (terminal.IsInteractive) Draw(terminal.Draw());
        else WriteSeparated(terminal.Writer);
    }

    private void Draw(IAnsiConsole console)
    {
        var table = new Table().Border(TableBorder.Rounded);
        for (int i = 0; i < columns.Length; i++)
        {
            var column = new TableColumn(Markup.Escape(columns[i]));
            // The first column names the row; the others are figures.
            table.AddColumn(i == 0 ? column : column.RightAligned());
        }
        foreach (string[] row in _rows) table.AddRow([.. row.Select(cell => new Text(cell))]);
        console.Write(table);
    }

    private void WriteSeparated(TextWriter writer)
    {
        foreach (string[] row in _rows.Prepend(columns)) writer.WriteLine(string.Join('\t', row.Select(OneCell)));
    }

    // A name from the data must not make a cell or a line of its own.
    private static string OneCell(string text) => !text.AsSpan().ContainsAny(Breaking)
        ? text
        : text.Replace('\t', ' ').Replace('\r', ' ').Replace('\n', ' ');
}
