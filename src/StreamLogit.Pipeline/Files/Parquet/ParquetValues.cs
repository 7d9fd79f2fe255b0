using Parquet;
using Parquet.Schema;

namespace StreamLogit.Pipeline.Files;

/// <summary>The values of one column in one row group, each at the place of its row.</summary>
internal sealed class ParquetValues<T>(DataField field) where T : struct
{
    private T[] _values = [];
    private int[] _levels = [];

    /// <summary>The value of a row; meaningless where there is none.</summary>
    public ref readonly T this[int row] => ref _values[row];

    /// <summary>Whether a row has a value.</summary>
    public bool Has(int row) => field.MaxDefinitionLevel == 0 || _levels[row] == field.MaxDefinitionLevel;

    /// <summary>Reads the values of a row group in place of those before.</summary>
    public async Task LoadAsync(ParquetRowGroupReader rows, int count)
    {
        if (_values.Length < count)
        {
            _values = new T[count];
            _levels = new int[count];
        }
        if (field.MaxDefinitionLevel == 0)
        {
            await rows.ReadRawAsync(field, _values.AsMemory(0, count), null, null, CancellationToken.None).ConfigureAwait(false);
            return;
        }
        await rows.ReadRawAsync(field, _values.AsMemory(0, count), _levels.AsMemory(0, count), null, CancellationToken.None).ConfigureAwait(false);
        Spread(count);
    }

    // The file holds the values that there are, one behind the other, and the levels say in which rows there are any.
    private void Spread(int count)
    {
        int packed = _levels.AsSpan(0, count).Count(field.MaxDefinitionLevel);
        if (packed == count) return;
        for (int row = count - 1; row >= packed && packed > 0; row--)
            if (_levels[row] == field.MaxDefinitionLevel) _values[row] = _values[--packed];
    }
}
