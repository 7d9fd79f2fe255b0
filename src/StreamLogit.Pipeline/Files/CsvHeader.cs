using System.Buffers;
using System.Text;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Files;

/// <summary>The names of a recording's columns, ready to be written as the keys of JSON objects.</summary>
internal sealed class CsvHeader
{
    private readonly byte[][] _keys;

    private CsvHeader(byte[][] keys) => _keys = keys;

    /// <summary>How many columns there are.</summary>
    public int Count => _keys.Length;

    /// <summary>Reads the header from its row.</summary>
    /// <exception cref="InvalidRecordingException">A name is empty or stands twice.</exception>
    public static CsvHeader Read(string path, ReadOnlySpan<byte> row, ReadOnlySpan<CsvCell> cells)
    {
        var columns = new Dictionary<string, int>(StringComparer.Ordinal);
        var faults = new List<string>();
        var keys = new byte[cells.Length][];
        for (int column = 0; column < cells.Length; column++)
        {
            string name = Encoding.UTF8.GetString(row.Slice(cells[column].Start, cells[column].Length));
            if (cells[column].HasDoubledQuotes) name = name.Replace("\"\"", "\"", StringComparison.Ordinal);
            if (name.Length == 0) faults.Add($"column {column + 1} has no name");
            else if (!columns.TryAdd(name, column)) faults.Add($"columns {columns[name] + 1} and {column + 1} are both named '{name}'");
            keys[column] = [(byte)'"', .. JsonText.Escape(name), (byte)'"', (byte)':'];
        }
        if (faults.Count > 0) throw new InvalidRecordingException($"The header of {path} is wrong: {string.Join("; ", faults)}.");
        return new CsvHeader(keys);
    }

    /// <summary>
    /// Writes a row as a JSON object: a cell that is a JSON number as a number, an empty one not at all, every other as a string.
    /// </summary>
    public void WriteObject(ReadOnlySpan<byte> row, ReadOnlySpan<CsvCell> cells, ArrayBufferWriter<byte> json)
    {
        bool isFirst = true;
        for (int column = 0; column < cells.Length; column++)
        {
            var cell = cells[column];
            if (cell.Length == 0) continue;
            var text = row.Slice(cell.Start, cell.Length);
            json.Write(isFirst ? "{"u8 : ","u8);
            json.Write(_keys[column]);
            isFirst = false;
            if (JsonText.IsNumber(text))
            {
                json.Write(text);
                continue;
            }
            json.Write("\""u8);
            if (cell.HasDoubledQuotes) WriteUndoubled(text, json);
            else JsonText.Write(text, json);
            json.Write("\""u8);
        }
        json.Write(isFirst ? "{}"u8 : "}"u8);
    }

    private static void WriteUndoubled(ReadOnlySpan<byte> text, ArrayBufferWriter<byte> json)
    {
        while (text.IndexOf((byte)'"') is >= 0 and int quote)
        {
            JsonText.Write(text[..(quote + 1)], json);
            text = text[(quote + 2)..];
        }
        JsonText.Write(text, json);
    }
}
