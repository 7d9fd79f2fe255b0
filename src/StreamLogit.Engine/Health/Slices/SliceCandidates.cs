using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Health.Slices;

/// <summary>
/// Finds the frequent values of a field in fixed memory: each value has one of 256 cells, in which it counts up and every other value of the cell counts down, until one takes the cell over
/// (the majority vote of Boyer &amp; Moore 1981, in each cell). Values that are rare next to a frequent one cannot hold its cell.
/// </summary>
internal sealed class SliceCandidates
{
    private const int Cells = 256;
    private readonly Candidate[] _cells = new Candidate[Cells];

    /// <summary>Counts a value.</summary>
    /// <param name="hash">The hash of its text.</param>
    /// <param name="text">Its text, kept when it takes over a cell.</param>
    public void Count(ulong hash, ReadOnlySpan<byte> text)
    {
        ref var cell = ref _cells[(int)(hash % Cells)];
        if (cell.Hash == hash && cell.Count > 0)
        {
            cell.Count++;
            return;
        }
        if (cell.Count > 0)
        {
            cell.Count--;
            return;
        }
        cell = new Candidate { Hash = hash, Count = 1 };
        cell.Text.Set(text);
    }

    /// <summary>The most frequent candidate.</summary>
    public ref Candidate Best()
    {
        int best = 0;
        for (int i = 1; i < Cells; i++)
            if (_cells[i].Count > _cells[best].Count) best = i;
        return ref _cells[best];
    }

    /// <summary>Halves all counts, so that what was frequent long ago does not stay so.</summary>
    public void Halve()
    {
        foreach (ref var cell in _cells.AsSpan()) cell.Count /= 2;
    }

    public void Save(BinaryWriter writer) => writer.Write(MemoryMarshal.AsBytes(_cells.AsSpan()));

    public void Load(BinaryReader reader) => reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(_cells.AsSpan()));

    internal struct Candidate
    {
        public ulong Hash;
        public long Count;
        public SliceText Text;
    }
}
