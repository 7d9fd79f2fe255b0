namespace StreamLogit.Pipeline.Files;

/// <summary>
/// Finds the cells of one row of comma-separated values (RFC 4180) in its bytes. Works on UTF-8 as it lies in the file, so that the
/// byte at which a row ends, and a run can be resumed, is known.
/// </summary>
internal sealed class CsvRowReader
{
    private CsvCell[] _cells = new CsvCell[64];
    private int _count;

    /// <summary>The cells of the row read last.</summary>
    public ReadOnlySpan<CsvCell> Cells => _cells.AsSpan(0, _count);

    /// <summary>Whether a cell of that row stands in quotes, and so may hold a line feed.</summary>
    public bool HasQuotes { get; private set; }

    /// <summary>What is wrong with the row, when it is malformed.</summary>
    public string Fault { get; private set; } = "";

    /// <summary>Reads the row at the front.</summary>
    /// <param name="bytes">The bytes from the row's first on.</param>
    /// <param name="atEnd">Whether no more will follow them.</param>
    /// <param name="length">The bytes of the row with its line end, where it is complete.</param>
    public CsvRowOutcome Read(ReadOnlySpan<byte> bytes, bool atEnd, out int length)
    {
        _count = 0;
        HasQuotes = false;
        length = 0;
        int start = 0;
        while (true)
        {
            bool isQuoted = start < bytes.Length && bytes[start] == '"';
            var outcome = isQuoted
                ? ReadQuoted(bytes, atEnd, start, out int end)
                : ReadPlain(bytes, atEnd, start, out end);
            if (outcome != CsvRowOutcome.Complete) return outcome;
            if (end < bytes.Length && bytes[end] == ',')
            {
                start = end + 1;
                continue;
            }
            length = Math.Min(end + 1, bytes.Length);
            return CsvRowOutcome.Complete;
        }
    }

    /// <summary>Reads a cell without quotes; <paramref name="end"/> is the comma or line feed behind it, or the end of all bytes.</summary>
    private CsvRowOutcome ReadPlain(ReadOnlySpan<byte> bytes, bool atEnd, int start, out int end)
    {
        int found = bytes[start..].IndexOfAny((byte)',', (byte)'\n', (byte)'"');
        end = found < 0 ? bytes.Length : start + found;
        if (found < 0 && !atEnd) return CsvRowOutcome.Incomplete;
        if (end < bytes.Length && bytes[end] == '"') return Malformed("a quote within a cell that does not begin with one");

        int length = end - start;
        bool endsRow = end == bytes.Length || bytes[end] == '\n';
        if (endsRow && length > 0 && bytes[end - 1] == '\r') length--;
        Add(new CsvCell(start, length, false));
        return CsvRowOutcome.Complete;
    }

    private CsvRowOutcome ReadQuoted(ReadOnlySpan<byte> bytes, bool atEnd, int start, out int end)
    {
        HasQuotes = true;
        bool hasDoubledQuotes = false;
        end = start + 1;
        while (true)
        {
            int found = bytes[end..].IndexOf((byte)'"');
            if (found < 0) return atEnd ? Malformed("a quote that is not closed") : CsvRowOutcome.Incomplete;
            end += found;
            // A quote at the very end may be the first of two.
            if (end + 1 == bytes.Length && !atEnd) return CsvRowOutcome.Incomplete;
            if (end + 1 == bytes.Length || bytes[end + 1] != '"') break;
            hasDoubledQuotes = true;
            end += 2;
        }
        Add(new CsvCell(start + 1, end - start - 1, hasDoubledQuotes));
        end++;
        if (end == bytes.Length || bytes[end] is (byte)',' or (byte)'\n') return CsvRowOutcome.Complete;
        if (bytes[end] == '\r')
        {
            if (end + 1 == bytes.Length && !atEnd) return CsvRowOutcome.Incomplete;
            end++;
            if (end == bytes.Length || bytes[end] == '\n') return CsvRowOutcome.Complete;
        }
        return Malformed("text behind the quote that closes a cell");
    }

    private CsvRowOutcome Malformed(string fault)
    {
        Fault = fault;
        return CsvRowOutcome.Malformed;
    }

    private void Add(CsvCell cell)
    {
        if (_count == _cells.Length) Array.Resize(ref _cells, _count * 2);
        _cells[_count++] = cell;
    }
}
