using System.Collections.Immutable;

namespace StreamLogit.Engine.Fitting;

/// <summary>Labelled rows in which every column has a value, for <see cref="MaximumLikelihood"/>. Takes 8 bytes a value.</summary>
public sealed class DenseRows
{
    private const int RowsPerChunk = 4096;
    private readonly List<Chunk> _chunks = [];

    /// <param name="columns">The names of the columns, without the intercept, which every fit has.</param>
    public DenseRows(ImmutableArray<string> columns) => Columns = columns;

    /// <summary>The names of the columns.</summary>
    public ImmutableArray<string> Columns { get; }

    /// <summary>Rows, without those of weight 0.</summary>
    public long Count { get; private set; }

    internal IReadOnlyList<Chunk> Chunks => _chunks;

    /// <summary>Adds a row.</summary>
    /// <param name="values">One finite value for each column.</param>
    /// <param name="label">0 or 1; for a row that stands for <paramref name="weight"/> trials, the share of ones among them.</param>
    /// <param name="weight">0 or more and finite; how many trials the row counts for.</param>
    /// <exception cref="ArgumentException">A value is missing, not finite or out of its range.</exception>
    public void Add(ReadOnlySpan<double> values, double label, double weight = 1)
    {
        if (values.Length != Columns.Length)
            throw new ArgumentException($"the row has {values.Length} values for {Columns.Length} columns", nameof(values));
        foreach (double value in values)
            if (!double.IsFinite(value)) throw new ArgumentException("a value is not finite", nameof(values));
        if (!(label >= 0 && label <= 1)) throw new ArgumentException("a label is not from 0 to 1", nameof(label));
        if (!(weight >= 0 && double.IsFinite(weight))) throw new ArgumentException("a weight is negative or not finite", nameof(weight));
        if (weight == 0) return;

        if (_chunks.Count == 0 || _chunks[^1].Count == RowsPerChunk) _chunks.Add(new Chunk(Columns.Length));
        _chunks[^1].Add(values, label, weight);
        Count++;
    }

    /// <summary>Some rows, one after the other.</summary>
    internal sealed class Chunk(int columns)
    {
        private double[] _values = new double[Math.Max(1, columns) * 16];
        private double[] _labels = new double[16];
        private double[] _weights = new double[16];

        public int Count { get; private set; }

        public ReadOnlySpan<double> Labels => _labels.AsSpan(0, Count);

        public ReadOnlySpan<double> Weights => _weights.AsSpan(0, Count);

        public ReadOnlySpan<double> Row(int row) => _values.AsSpan(row * columns, columns);

        public void Add(ReadOnlySpan<double> values, double label, double weight)
        {
            if (Count == _labels.Length)
            {
                Array.Resize(ref _values, 2 * _values.Length);
                Array.Resize(ref _labels, 2 * Count);
                Array.Resize(ref _weights, 2 * Count);
            }
            values.CopyTo(_values.AsSpan(Count * columns));
            _labels[Count] = label;
            _weights[Count] = weight;
            Count++;
        }
    }
}
