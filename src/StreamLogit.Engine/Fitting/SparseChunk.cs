using System.IO.Hashing;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Fitting;

/// <summary>
/// Some sparse rows, compressed row by row. Entries of value 1, which categories have, are kept apart from the others: they need no value and no product.
/// </summary>
internal sealed class SparseChunk
{
    /// <summary>The most rows: what is computed of each row then stays in the cache of the core. A multiple of every lane width.</summary>
    public const int MostRows = 2048;

    private int[] _onesEnd = new int[16];
    private int[] _othersEnd = new int[16];
    private int[] _ones = new int[64];
    private int[] _others = new int[16];
    private double[] _values = new double[16];
    private byte[] _labels = new byte[16];
    private double[]? _weights;

    public int Count { get; private set; }

    public bool IsFull => Count == MostRows;

    public long Bytes => (_onesEnd.Length + _othersEnd.Length + _ones.Length + _others.Length) * (long)sizeof(int)
        + (_values.Length + (_weights?.Length ?? 0)) * (long)sizeof(double) + _labels.Length;

    public ReadOnlySpan<byte> Labels => _labels.AsSpan(0, Count);

    public void Add(in EncodedVector x, SparseColumns columns, int label, double weight)
    {
        int onesEnd = Count > 0 ? _onesEnd[Count - 1] : 0, othersEnd = Count > 0 ? _othersEnd[Count - 1] : 0;
        for (int i = 0; i < x.Slots.Length; i++)
        {
            int column = columns.ColumnOf(x.Slots[i]);
            double value = x.Values[i];
            if (value == 1) Put(ref _ones, onesEnd++, column);
            else if (value != 0)
            {
                Put(ref _values, othersEnd, value);
                Put(ref _others, othersEnd++, column);
            }
        }
        Put(ref _onesEnd, Count, onesEnd);
        Put(ref _othersEnd, Count, othersEnd);
        Put(ref _labels, Count, (byte)label);
        if (_weights is null && weight != 1) MakeWeights();
        if (_weights is not null) Put(ref _weights, Count, weight);
        Count++;
    }

    public void SetWeight(int row, double weight)
    {
        if (_weights is null) MakeWeights();
        _weights![row] = weight;
    }

    public void Trim()
    {
        Array.Resize(ref _ones, Count > 0 ? _onesEnd[Count - 1] : 0);
        Array.Resize(ref _others, Count > 0 ? _othersEnd[Count - 1] : 0);
        Array.Resize(ref _values, _others.Length);
        Array.Resize(ref _onesEnd, Count);
        Array.Resize(ref _othersEnd, Count);
        Array.Resize(ref _labels, Count);
        if (_weights is not null) Array.Resize(ref _weights, Count);
    }

    public double Weight(int row) => _weights is null ? 1 : _weights[row];

    /// <summary>Computes, for each row, the constant plus the sum of its values times the coefficients of their columns.</summary>
    public void Multiply(ReadOnlySpan<double> coefficients, double constant, Span<double> products)
    {
        int one = 0, other = 0;
        for (int row = 0; row < Count; row++)
        {
            double sum = constant;
            for (; one < _onesEnd[row]; one++) sum += coefficients[_ones[one]];
            for (; other < _othersEnd[row]; other++) sum += coefficients[_others[other]] * _values[other];
            products[row] = sum;
        }
    }

    /// <summary>Adds, to the sum of each column, its values times the factors of their rows.</summary>
    public void AddTransposed(ReadOnlySpan<double> factors, Span<double> sums)
    {
        int one = 0, other = 0;
        for (int row = 0; row < Count; row++)
        {
            double factor = factors[row];
            for (; one < _onesEnd[row]; one++) sums[_ones[one]] += factor;
            for (; other < _othersEnd[row]; other++) sums[_others[other]] += factor * _values[other];
        }
    }

    /// <summary>Adds, to the sum of each column, the squares of its values times the factors of their rows.</summary>
    public void AddSquares(ReadOnlySpan<double> factors, Span<double> sums)
    {
        int one = 0, other = 0;
        for (int row = 0; row < Count; row++)
        {
            double factor = factors[row];
            for (; one < _onesEnd[row]; one++) sums[_ones[one]] += factor;
            for (; other < _othersEnd[row]; other++) sums[_others[other]] += factor * _values[other] * _values[other];
        }
    }

    /// <summary>Adds the values of a row to those of their columns.</summary>
    public void AddRowTo(Span<double> values, int row)
    {
        foreach (int column in Ones(row)) values[column]++;
        var others = Others(row);
        var otherValues = Values(row);
        for (int i = 0; i < others.Length; i++) values[others[i]] += otherValues[i];
    }

    /// <summary>A hash of a row's entries and its label.</summary>
    public ulong HashOf(int row)
    {
        ulong hash = XxHash3.HashToUInt64(MemoryMarshal.AsBytes(Ones(row)), _labels[row]);
        hash = XxHash3.HashToUInt64(MemoryMarshal.AsBytes(Others(row)), (long)hash);
        return XxHash3.HashToUInt64(MemoryMarshal.AsBytes(Values(row)), (long)hash);
    }

    /// <summary>Whether a row is equal to one of another chunk: entries, label and weight, which whoever takes a row back knows to seven digits.</summary>
    public bool IsEqual(int row, SparseChunk other, int otherRow) =>
        _labels[row] == other._labels[otherRow] && (float)Weight(row) == (float)other.Weight(otherRow) && Ones(row).SequenceEqual(other.Ones(otherRow))
        && Others(row).SequenceEqual(other.Others(otherRow)) && Values(row).SequenceEqual(other.Values(otherRow));

    private ReadOnlySpan<int> Ones(int row) => _ones.AsSpan((row > 0 ? _onesEnd[row - 1] : 0).._onesEnd[row]);

    private ReadOnlySpan<int> Others(int row) => _others.AsSpan((row > 0 ? _othersEnd[row - 1] : 0).._othersEnd[row]);

    private ReadOnlySpan<double> Values(int row) => _values.AsSpan((row > 0 ? _othersEnd[row - 1] : 0).._othersEnd[row]);

    private void MakeWeights()
    {
        _weights = new double[_labels.Length];
        Array.Fill(_weights, 1, 0, Count);
    }

    private static void Put<T>(ref T[] array, int place, T value)
    {
        if (place == array.Length) Array.Resize(ref array, Math.Max(16, 2 * array.Length));
        array[place] = value;
    }
}
