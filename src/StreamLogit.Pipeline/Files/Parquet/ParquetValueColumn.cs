using System.Buffers.Text;
using System.Runtime.CompilerServices;
using Parquet;
using Parquet.Schema;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Files;

/// <summary>
/// A column of numbers, booleans or times. Times are written as RFC 3339 in UTC; numbers with the fewest digits that give them back; a number that is
/// not finite has no place in JSON and counts as missing.
/// </summary>
internal sealed class ParquetValueColumn<T>(DataField field) : ParquetColumn(field) where T : struct
{
    // The longest are identifiers and times in quotes, and decimals.
    private const int LongestValue = 40;

    private readonly ParquetValues<T> _values = new(field);

    public override Task LoadAsync(ParquetRowGroupReader rows, int count) => _values.LoadAsync(rows, count);

    public override int MaximumLength(int row) => LongestValue;

    public override int Write(int row, Span<byte> room) => _values.Has(row) ? Write(_values[row], room) : 0;

    // The comparisons of types are decided when the code is compiled for a type: nothing is boxed.
    private static int Write(T value, Span<byte> room)
    {
        int written = 0;
        if (typeof(T) == typeof(long)) Utf8Formatter.TryFormat(As<long>(value), room, out written);
        else if (typeof(T) == typeof(int)) Utf8Formatter.TryFormat(As<int>(value), room, out written);
        else if (typeof(T) == typeof(short)) Utf8Formatter.TryFormat(As<short>(value), room, out written);
        else if (typeof(T) == typeof(sbyte)) Utf8Formatter.TryFormat(As<sbyte>(value), room, out written);
        else if (typeof(T) == typeof(ulong)) Utf8Formatter.TryFormat(As<ulong>(value), room, out written);
        else if (typeof(T) == typeof(uint)) Utf8Formatter.TryFormat(As<uint>(value), room, out written);
        else if (typeof(T) == typeof(ushort)) Utf8Formatter.TryFormat(As<ushort>(value), room, out written);
        else if (typeof(T) == typeof(byte)) Utf8Formatter.TryFormat(As<byte>(value), room, out written);
        else if (typeof(T) == typeof(decimal)) Utf8Formatter.TryFormat(As<decimal>(value), room, out written);
        else if (typeof(T) == typeof(bool)) Utf8Formatter.TryFormat(As<bool>(value), room, out written, 'l');
        else if (typeof(T) == typeof(double) && double.IsFinite(As<double>(value))) Utf8Formatter.TryFormat(As<double>(value), room, out written);
        else if (typeof(T) == typeof(float) && float.IsFinite(As<float>(value))) Utf8Formatter.TryFormat(As<float>(value), room, out written);
        else if (typeof(T) == typeof(DateTime)) written = Quote(room, TimestampText.Write(Microseconds(As<DateTime>(value)), room[1..]));
        else if (typeof(T) == typeof(Guid)) written = Utf8Formatter.TryFormat(As<Guid>(value), room[1..], out int length) ? Quote(room, length) : 0;
        return written;
    }

    private static TValue As<TValue>(T value) => Unsafe.As<T, TValue>(ref value);

    private static long Microseconds(DateTime time) => (time.Ticks - DateTime.UnixEpoch.Ticks) / TimeSpan.TicksPerMicrosecond;

    private static int Quote(Span<byte> room, int length)
    {
        room[0] = room[length + 1] = (byte)'"';
        return length + 2;
    }
}
