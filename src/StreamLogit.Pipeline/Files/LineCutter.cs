using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Files;

/// <summary>
/// Cuts JSON Lines: a record ends with a line feed, before which a carriage return is dropped; the last one may end with the file.
/// An empty line is a record (and no JSON), except at the end of the file.
/// </summary>
internal sealed class LineCutter(int maximumBytes) : IRecordCutter
{
    private readonly LongLine _longLine = new(maximumBytes);

    // Bytes at the front that are known to hold no line feed, so that a line that comes in pieces is searched once.
    private int _searched;

    public long Line { get; set; }

    public bool IsWithinRecord => _longLine.IsOpen;

    public bool NeedsHeader => false;

    public int CutHeader(ReadOnlySpan<byte> unread, bool atEnd) => 0;

    public int Cut(ReadOnlySpan<byte> unread, bool atEnd, RecordBatch batch)
    {
        if (_longLine.IsOpen) return PassLongLine(unread, atEnd, batch);
        if (unread.IsEmpty) return 0;

        int newline = unread[_searched..].IndexOf((byte)'\n');
        if (newline < 0)
        {
            // One byte more may be the carriage return of a line that is just short enough.
            if (unread.Length > maximumBytes + 1) return PassLongLine(unread, atEnd, batch);
            if (!atEnd)
            {
                _searched = unread.Length;
                return 0;
            }
        }
        else
        {
            newline += _searched;
        }
        _searched = 0;

        var record = newline < 0 ? unread : unread[..newline];
        int taken = newline < 0 ? unread.Length : newline + 1;
        if (record is [.., (byte)'\r']) record = record[..^1];
        if (record.IsEmpty && taken == unread.Length)
        {
            // Whether an empty line is the last one shows only when more comes.
            if (!atEnd) return 0;
            Line++;
            return taken;
        }

        Line++;
        if (record.Length > maximumBytes) _longLine.Reject(record, record.Length, Line, batch);
        else batch.Add(record, Line);
        return taken;
    }

    private int PassLongLine(ReadOnlySpan<byte> unread, bool atEnd, RecordBatch batch)
    {
        _searched = 0;
        int taken = _longLine.Pass(unread, atEnd, Line + 1, batch);
        if (!_longLine.IsOpen) Line++;
        return taken;
    }
}
