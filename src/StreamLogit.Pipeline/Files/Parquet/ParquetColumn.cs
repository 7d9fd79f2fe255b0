using Parquet;
using Parquet.Schema;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Files;

/// <summary>One column of a Parquet file, with the values of one row group, ready to be written as members of JSON objects.</summary>
internal abstract class ParquetColumn(DataField field)
{
    /// <summary>The name, quoted, and a colon. Fields of a structure have the names on the way to them, joined by dots.</summary>
    public byte[] Key { get; } = [(byte)'"', .. JsonText.Escape(string.Join('.', field.Path.ToList())), (byte)'"', (byte)':'];

    /// <summary>Reads the values of a row group in place of those before.</summary>
    public abstract Task LoadAsync(ParquetRowGroupReader rows, int count);

    /// <summary>The most bytes that the value of a row takes.</summary>
    public abstract int MaximumLength(int row);

    /// <summary>Writes the value of a row as JSON.</summary>
    /// <returns>How many bytes were written; 0 where the row has no value.</returns>
    public abstract int Write(int row, Span<byte> room);

    /// <summary>The column of a field, or null where its values have no place in a record: lists, maps, intervals.</summary>
    public static ParquetColumn? Of(DataField field)
    {
        if (field.MaxRepetitionLevel > 0) return null;
        var type = field.ClrType;
        return type == typeof(ReadOnlyMemory<char>) || type == typeof(string) ? new ParquetTextColumn(field)
            : type == typeof(long) ? new ParquetValueColumn<long>(field)
            : type == typeof(int) ? new ParquetValueColumn<int>(field)
            : type == typeof(double) ? new ParquetValueColumn<double>(field)
            : type == typeof(float) ? new ParquetValueColumn<float>(field)
            : type == typeof(bool) ? new ParquetValueColumn<bool>(field)
            : type == typeof(DateTime) ? new ParquetValueColumn<DateTime>(field)
            : type == typeof(decimal) ? new ParquetValueColumn<decimal>(field)
            : type == typeof(Guid) ? new ParquetValueColumn<Guid>(field)
            : type == typeof(short) ? new ParquetValueColumn<short>(field)
            : type == typeof(ushort) ? new ParquetValueColumn<ushort>(field)
            : type == typeof(sbyte) ? new ParquetValueColumn<sbyte>(field)
            : type == typeof(byte) ? new ParquetValueColumn<byte>(field)
            : type == typeof(uint) ? new ParquetValueColumn<uint>(field)
            : type == typeof(ulong) ? new ParquetValueColumn<ulong>(field)
            : null;
    }
}
