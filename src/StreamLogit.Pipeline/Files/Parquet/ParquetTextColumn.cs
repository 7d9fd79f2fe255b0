using System.Text;
using Parquet;
using Parquet.Schema;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Files;

/// <summary>A column of text. The texts are turned into JSON as soon as they are read, because they lie in memory that is read into again.</summary>
internal sealed class ParquetTextColumn(DataField field) : ParquetColumn(field)
{
    private readonly ParquetValues<ReadOnlyMemory<char>> _values = new(field);
    private byte[] _json = [];
    private int[] _ends = [];
    private byte[] _utf8 = new byte[256];

    public override async Task LoadAsync(ParquetRowGroupReader rows, int count)
    {
        await _values.LoadAsync(rows, count).ConfigureAwait(false);
        if (_ends.Length < count) _ends = new int[count];
        int end = 0;
        for (int row = 0; row < count; row++)
        {
            if (_values.Has(row)) end = Add(_values[row].Span, end);
            _ends[row] = end;
        }
    }

    public override int MaximumLength(int row) => _ends[row] - StartOf(row);

    public override int Write(int row, Span<byte> room)
    {
        int start = StartOf(row);
        var json = _json.AsSpan(start, _ends[row] - start);
        json.CopyTo(room);
        return json.Length;
    }

    private int StartOf(int row) => row == 0 ? 0 : _ends[row - 1];

    private int Add(ReadOnlySpan<char> text, int start)
    {
        int longest = Encoding.UTF8.GetMaxByteCount(text.Length);
        if (_utf8.Length < longest) _utf8 = new byte[longest];
        int length = Encoding.UTF8.GetBytes(text, _utf8);
        int room = JsonText.MaximumLength(length) + 2;
        if (_json.Length - start < room) Array.Resize(ref _json, Math.Max(_json.Length * 2, start + room));
        _json[start] = (byte)'"';
        int end = start + 1 + JsonText.Write(_utf8.AsSpan(0, length), _json.AsSpan(start + 1));
        _json[end] = (byte)'"';
        return end + 1;
    }
}
