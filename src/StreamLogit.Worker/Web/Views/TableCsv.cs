using System.Buffers;
using System.Globalization;
using System.Text;

namespace StreamLogit.Worker.Web.Views;

/// <summary>Tables as comma-separated values (RFC 4180), UTF-8.</summary>
internal static class TableCsv
{
    private static readonly SearchValues<char> Quoted = SearchValues.Create(",\"\r\n");

    public static byte[] Of(DataTable table)
    {
        var text = new StringBuilder();
        AddRow(text, table.Columns.Select(column => column.Key));
        foreach (var row in table.Rows) AddRow(text, row.Select(Cell));
        return Encoding.UTF8.GetBytes(text.ToString());
    }

    private static void AddRow(StringBuilder text, IEnumerable<string> cells) => text.AppendJoin(',', cells).Append("\r\n");

    private static string Cell(object? cell) => cell switch
    {
        string text => Escape(text),
        double number when double.IsFinite(number) => number.ToString("R", CultureInfo.InvariantCulture),
        double => "",
        IFormattable number => number.ToString(null, CultureInfo.InvariantCulture),
        _ => "",
    };

    private static string Escape(string text)
    {
        // Text comes from the stream, and spreadsheets take such a beginning for a formula.
        if (text.Length > 0 && text[0] is '=' or '+' or '-' or '@' or '\t' or '\r') text = "'" + text;
        return text.AsSpan().ContainsAny(Quoted) ? $"\"{text.Replace("\"", "\"\"", StringComparison.Ordinal)}\"" : text;
    }
}
