namespace StreamLogit.Engine.Health.RollUps;

/// <summary>The last so many tallies, each kept as its cells in use, one behind the other in a ring that grows until it is large enough.</summary>
/// <param name="kept">How many tallies are kept.</param>
/// <param name="width">Doubles of a cell.</param>
/// <param name="cellsAtFirst">Room at first, in cells of all tallies together.</param>
internal sealed class PackedTallies(int kept, int width, int cellsAtFirst)
{
    private readonly (long First, int Count)[] _tallies = new (long, int)[Math.Max(kept, 1)];
    private int[] _cells = new int[RoomFor(cellsAtFirst)]; // a power of two
    private double[] _values = new double[RoomFor(cellsAtFirst) * width];
    private long _end; // cells ever added
    private long _added; // tallies ever added

    public int Kept => kept;

    /// <summary>How many tallies were ever added; the last of them has the number <c>Added - 1</c>.</summary>
    public long Added => _added;

    /// <summary>Whether the tally of that number is still here.</summary>
    public bool Has(long number) => number >= Math.Max(0, _added - kept) && number < _added;

    public void Add(Tally tally)
    {
        if (kept == 0)
        {
            _added++;
            return;
        }
        int count = tally.Count;
        int place = (int)(_added % kept);
        _tallies[place] = (_end, 0); // the one that is replaced frees its cells
        _added++;
        Reserve(count);
        _tallies[place] = (_end, count);
        tally.CopyTo(_cells, _values, _end);
        _end += count;
    }

    /// <summary>Adds the tally of a number to <paramref name="target"/>; nothing where it is gone.</summary>
    public void AddTo(long number, Tally target)
    {
        if (!Has(number)) return;
        var (first, count) = _tallies[number % kept];
        for (long i = first; i < first + count; i++)
        {
            int at = (int)i & (_cells.Length - 1);
            target.Add(_cells[at], _values.AsSpan(at * width, width));
        }
    }

    /// <summary>The doubles of a cell of a tally, to be changed, or nothing where the tally or the cell is gone.</summary>
    public Span<double> Find(long number, int cell)
    {
        if (!Has(number)) return default;
        var (first, count) = _tallies[number % kept];
        for (long i = first; i < first + count; i++)
        {
            int at = (int)i & (_cells.Length - 1);
            if (_cells[at] == cell) return _values.AsSpan(at * width, width);
        }
        return default;
    }

    public void Save(long number, BinaryWriter writer)
    {
        var (first, count) = Has(number) ? _tallies[number % kept] : default;
        writer.Write(count);
        for (long i = first; i < first + count; i++)
        {
            int at = (int)i & (_cells.Length - 1);
            writer.Write(_cells[at]);
            for (int j = 0; j < width; j++) writer.Write(_values[at * width + j]);
        }
    }

    private void Reserve(int cells)
    {
        // Tallies follow each other in the ring, so everything from the oldest kept one on is in use.
        long oldest = _added > kept ? _tallies[_added % kept].First : _tallies[0].First;
        long needed = _end - oldest + cells;
        if (needed <= _cells.Length) return;
        int length = _cells.Length;
        while (length < needed) length *= 2;
        var (newCells, newValues) = (new int[length], new double[length * width]);
        for (long i = oldest; i < _end; i++)
        {
            int from = (int)i & (_cells.Length - 1), to = (int)i & (length - 1);
            newCells[to] = _cells[from];
            _values.AsSpan(from * width, width).CopyTo(newValues.AsSpan(to * width, width));
        }
        (_cells, _values) = (newCells, newValues);
    }

    private static int RoomFor(int cells) => (int)System.Numerics.BitOperations.RoundUpToPowerOf2((uint)Math.Max(cells, 16));
}
