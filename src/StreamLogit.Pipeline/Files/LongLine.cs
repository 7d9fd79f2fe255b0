using System.Globalization;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Files;

/// <summary>A line that is longer than the definition allows, on its way past: its first bytes are kept, the rest is only counted.</summary>
internal sealed class LongLine(int maximumBytes)
{
    /// <summary>How many bytes of such a line its reject shows.</summary>
    public const int ShownBytes = 1024;

    private readonly byte[] _first = new byte[Math.Min(ShownBytes, maximumBytes)];
    private long _length;

    /// <summary>Whether such a line is being passed over.</summary>
    public bool IsOpen => _length > 0;

    /// <summary>Passes over bytes up to and including the end of the line, if it is there. At the end of the line its reject is added.</summary>
    /// <returns>How many bytes were taken: all of them, if the line does not end within.</returns>
    public int Pass(ReadOnlySpan<byte> unread, bool atEnd, long line, RecordBatch batch)
    {
        int newline = unread.IndexOf((byte)'\n');
        var part = newline < 0 ? unread : unread[..newline];
        if (_length == 0) part[.._first.Length].CopyTo(_first);
        _length += part.Length;
        if (newline >= 0 || atEnd)
        {
            Reject(_first, _length, line, batch);
            _length = 0;
        }
        return newline < 0 ? part.Length : newline + 1;
    }

    /// <summary>Adds the reject of a record that is in memory as a whole.</summary>
    public void Reject(ReadOnlySpan<byte> record, long length, long line, RecordBatch batch) =>
        batch.AddTooLong(record[.._first.Length], line,
            string.Create(CultureInfo.InvariantCulture, $"{length} bytes; at most {maximumBytes} are allowed"));
}
