using System.Collections.Immutable;
using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Fitting;

/// <summary>
/// Labelled sparse rows for <see cref="PenalisedLikelihood"/>, in compact arrays: 4 bytes for an entry of value 1, 12 for any other, and 9 for the row
/// (17 from the first weight other than 1 on).
/// </summary>
public sealed class SparseRows(SparseColumns columns)
{
    private readonly List<SparseChunk> _chunks = [];
    private SparseChunk? _takenBack;

    /// <summary>The columns, shared with the rows that are fitted together with these.</summary>
    public SparseColumns Columns { get; } = columns;

    /// <summary>Rows, without those of weight 0.</summary>
    public long Count { get; private set; }

    /// <summary>Bytes that they take.</summary>
    public long Bytes => _chunks.Sum(c => c.Bytes);

    internal IReadOnlyList<SparseChunk> Chunks => _chunks;

    /// <summary>Adds a row.</summary>
    /// <param name="x">Its entries. The values are finite; of a slot that stands there twice the values add up.</param>
    /// <param name="label">0 or 1.</param>
    /// <param name="weight">0 or more and finite.</param>
    /// <exception cref="ArgumentException">A value is out of its range.</exception>
    public void Add(in EncodedVector x, int label, double weight = 1)
    {
        foreach (double value in x.Values)
            if (!double.IsFinite(value)) throw new ArgumentException("a value is not finite", nameof(x));
        if (label is not (0 or 1)) throw new ArgumentException("a label is not 0 or 1", nameof(label));
        if (!(weight >= 0 && double.IsFinite(weight))) throw new ArgumentException("a weight is negative or not finite", nameof(weight));
        if (weight == 0) return;

        if (_chunks.Count == 0 || _chunks[^1].IsFull)
        {
            Trim();
            _chunks.Add(new SparseChunk());
        }
        _chunks[^1].Add(in x, Columns, label, weight);
        Count++;
    }

    /// <summary>Takes back a row that was added, because its label was wrong. It is gone after <see cref="Trim"/>.</summary>
    /// <param name="x">Its entries, as they were added.</param>
    /// <param name="label">Its label.</param>
    /// <param name="weight">Its weight.</param>
    public void TakeBack(in EncodedVector x, int label, double weight)
    {
        if (weight == 0) return;
        _takenBack ??= new SparseChunk();
        _takenBack.Add(in x, Columns, label, weight);
        if (_takenBack.IsFull) Settle();
    }

    /// <summary>The same rows with a value for each of some columns.</summary>
    /// <param name="columns">The columns, in their new order.</param>
    /// <param name="names">Their names.</param>
    public DenseRows ToDense(ReadOnlySpan<int> columns, ImmutableArray<string> names)
    {
        var dense = new DenseRows(names);
        var values = new double[Columns.Count];
        var chosen = new double[columns.Length];
        foreach (var chunk in _chunks)
            for (int row = 0; row < chunk.Count; row++)
            {
                Array.Clear(values);
                chunk.AddRowTo(values, row);
                for (int k = 0; k < chosen.Length; k++) chosen[k] = values[columns[k]];
                dense.Add(chosen, chunk.Labels[row], chunk.Weight(row));
            }
        return dense;
    }

    /// <summary>Carries out what was taken back, and gives back the memory that was reserved for further rows.</summary>
    public void Trim()
    {
        Settle();
        if (_chunks.Count > 0) _chunks[^1].Trim();
    }

    // Rows that are equal in everything stand for each other, so any of them may go.
    private void Settle()
    {
        if (_takenBack is null) return;
        var pending = new Dictionary<ulong, List<int>>();
        for (int row = 0; row < _takenBack.Count; row++)
        {
            ulong hash = _takenBack.HashOf(row);
            if (pending.TryGetValue(hash, out var same)) same.Add(row);
            else pending.Add(hash, [row]);
        }
        foreach (var chunk in _chunks)
            for (int row = 0; row < chunk.Count && pending.Count > 0; row++)
            {
                ulong hash = chunk.HashOf(row);
                if (!pending.TryGetValue(hash, out var same)) continue;
                int match = same.FindIndex(r => chunk.IsEqual(row, _takenBack, r));
                if (match < 0) continue;
                same.RemoveAt(match);
                if (same.Count == 0) pending.Remove(hash);
                chunk.SetWeight(row, 0);
                Count--;
            }
        _takenBack = null;
    }
}
