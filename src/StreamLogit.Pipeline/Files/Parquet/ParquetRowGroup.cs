using System.Collections.Immutable;
using Parquet;
using Parquet.Schema;

namespace StreamLogit.Pipeline.Files;

/// <summary>One row group of a Parquet file in memory.</summary>
internal sealed class ParquetRowGroup(IEnumerable<DataField> fields)
{
    private readonly ImmutableArray<ParquetColumn> _columns = [.. fields.Select(ParquetColumn.Of).OfType<ParquetColumn>()];
    private byte[] _json = new byte[1 << 10];

    /// <summary>The number of its first row in the file, from 0.</summary>
    public long FirstRow { get; private set; }

    /// <summary>Rows.</summary>
    public int Count { get; private set; }

    /// <summary>Reads a row group in place of the one before.</summary>
    public async Task LoadAsync(ParquetReader file, int group, long firstRow)
    {
        using var rows = file.OpenRowGroupReader(group);
        int count = checked((int)rows.RowCount);
        foreach (var column in _columns) await column.LoadAsync(rows, count).ConfigureAwait(false);
        FirstRow = firstRow;
        Count = count;
    }

    /// <summary>A row as a JSON object, valid until the next call. What it has no value for is left out.</summary>
    public ReadOnlySpan<byte> Json(int row)
    {
        int end = 0;
        foreach (var column in _columns)
        {
            int room = column.Key.Length + column.MaximumLength(row) + 2;
            if (_json.Length - end < room) Array.Resize(ref _json, Math.Max(_json.Length * 2, end + room));
            var target = _json.AsSpan(end);
            int value = column.Write(row, target[(1 + column.Key.Length)..]);
            if (value == 0) continue;
            target[0] = end == 0 ? (byte)'{' : (byte)',';
            column.Key.CopyTo(target[1..]);
            end += 1 + column.Key.Length + value;
        }
        if (end == 0) _json[end++] = (byte)'{';
        _json[end++] = (byte)'}';
        return _json.AsSpan(0, end);
    }
}
