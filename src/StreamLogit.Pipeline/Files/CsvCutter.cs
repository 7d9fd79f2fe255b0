using System.Buffers;
using System.Globalization;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Files;

/// <summary>
/// Cuts comma-separated values (RFC 4180) and gives each row as a JSON object whose keys are the header's names.
/// </summary>
/// <remarks>
/// A quote that is never closed must not swallow the rest of the file: of a malformed row only the first line is taken, as a reject,
/// and the next row begins behind it.
/// </remarks>
internal sealed class CsvCutter(string path, int maximumBytes) : IRecordCutter
{
    private readonly LongLine _longLine = new(maximumBytes);
    private readonly CsvRowReader _row = new();
    private readonly ArrayBufferWriter<byte> _json = new(1 << 12);
    private CsvHeader? _header;

    public long Line { get; set; }

    public bool IsWithinRecord => _longLine.IsOpen;

    public bool NeedsHeader => _header is null;

    public int CutHeader(ReadOnlySpan<byte> unread, bool atEnd)
    {
        if (unread.IsEmpty && atEnd) throw new InvalidRecordingException($"{path} is empty; its first line must name the columns.");
        int length = 0;
        var outcome = unread.IsEmpty ? CsvRowOutcome.Incomplete : _row.Read(unread, atEnd, out length);
        if (outcome == CsvRowOutcome.Incomplete && unread.Length <= maximumBytes) return 0;
        if (outcome != CsvRowOutcome.Complete)
            throw new InvalidRecordingException($"The header of {path} cannot be read: it has {RowFault(outcome)}.");
        _header = CsvHeader.Read(path, unread, _row.Cells);
        Line += LinesOf(unread[..length]);
        return length;
    }

    public int Cut(ReadOnlySpan<byte> unread, bool atEnd, RecordBatch batch)
    {
        if (_longLine.IsOpen) return PassLongLine(unread, atEnd, batch);
        if (unread.IsEmpty) return 0;
        var header = _header ?? throw new InvalidOperationException("The header comes first.");

        int lineEnd = EmptyLine(unread);
        if (lineEnd > 0 && lineEnd == unread.Length)
        {
            // Whether an empty line is the last one shows only when more comes.
            if (!atEnd) return 0;
            Line++;
            return lineEnd;
        }

        switch (_row.Read(unread, atEnd, out int length))
        {
            case CsvRowOutcome.Complete:
                TakeRow(header, unread[..length], batch);
                return length;
            case CsvRowOutcome.Incomplete when unread.Length <= maximumBytes + 1:
                return 0;
            case var outcome:
                return TakeFirstLine(unread, atEnd, batch, RowFault(outcome));
        }
    }

    private void TakeRow(CsvHeader header, ReadOnlySpan<byte> row, RecordBatch batch)
    {
        long line = Line + 1;
        Line += LinesOf(row);
        int length = TrimEnd(row).Length;
        if (length > maximumBytes)
        {
            _longLine.Reject(row, length, line, batch);
            return;
        }
        if (_row.Cells.Length != header.Count)
        {
            Reject(TrimEnd(row), line, batch, string.Create(CultureInfo.InvariantCulture,
                $"{_row.Cells.Length} cells where the header has {header.Count}"));
            return;
        }
        _json.ResetWrittenCount();
        header.WriteObject(row, _row.Cells, _json);
        batch.Add(_json.WrittenSpan, line);
    }

    private int TakeFirstLine(ReadOnlySpan<byte> unread, bool atEnd, RecordBatch batch, string fault)
    {
        int newline = unread.IndexOf((byte)'\n');
        if (newline < 0 && !atEnd)
            return unread.Length > maximumBytes + 1 ? PassLongLine(unread, atEnd, batch) : 0;
        var line = newline < 0 ? unread : unread[..newline];
        if (line.Length > maximumBytes + 1) return PassLongLine(unread, atEnd, batch);
        Line++;
        Reject(TrimEnd(line), Line, batch, fault);
        return newline < 0 ? unread.Length : newline + 1;
    }

    private int PassLongLine(ReadOnlySpan<byte> unread, bool atEnd, RecordBatch batch)
    {
        int taken = _longLine.Pass(unread, atEnd, Line + 1, batch);
        if (!_longLine.IsOpen) Line++;
        return taken;
    }

    private string RowFault(CsvRowOutcome outcome) => outcome == CsvRowOutcome.Incomplete
        ? string.Create(CultureInfo.InvariantCulture, $"no end of the row within {maximumBytes} bytes")
        : _row.Fault;

    private int LinesOf(ReadOnlySpan<byte> row) => _row.HasQuotes ? Math.Max(1, row.Count((byte)'\n')) : 1;

    private static void Reject(ReadOnlySpan<byte> row, long line, RecordBatch batch, string fault)
    {
        batch.Add(row, line);
        batch.Reject(batch.Count - 1, RejectReason.RowMalformed, fault);
    }

    private static int EmptyLine(ReadOnlySpan<byte> bytes) => bytes switch
    {
        [(byte)'\n', ..] => 1,
        [(byte)'\r', (byte)'\n', ..] => 2,
        [(byte)'\r'] => 1,
        _ => 0,
    };

    private static ReadOnlySpan<byte> TrimEnd(ReadOnlySpan<byte> row) => row.TrimEnd("\r\n"u8);
}
