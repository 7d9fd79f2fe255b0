namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>
/// Sums by time, in a bounded number of cells. Cells start with an hour; when there are too many, neighbours are added up to cells of 2, 4 and 8 hours,
/// then of whole days (UTC), then of 2 days, 4 days and so on.
/// </summary>
internal sealed class TimeCells(int width, int maximumCells)
{
    private const long Hour = 3_600_000_000;
    private Dictionary<long, double[]> _cells = [];
    private long _lastNumber = long.MinValue;
    private double[] _last = [];

    /// <summary>A calendar day.</summary>
    public const long Day = 24 * Hour;

    /// <summary>How long a cell is.</summary>
    public long CellMicroseconds { get; private set; } = Hour;

    /// <summary>Cells with anything in them.</summary>
    public int Count => _cells.Count;

    /// <summary>The sums of the cell of a time. They are the caller's to add to until the next call.</summary>
    public double[] At(long timeMicroseconds)
    {
        long number = NumberOf(timeMicroseconds);
        if (number == _lastNumber) return _last;
        if (!_cells.TryGetValue(number, out var sums))
        {
            while (_cells.Count >= maximumCells) Coarsen();
            number = NumberOf(timeMicroseconds);
            if (!_cells.TryGetValue(number, out sums)) _cells.Add(number, sums = new double[width]);
        }
        (_lastNumber, _last) = (number, sums);
        return sums;
    }

    /// <summary>The cells in the order of time.</summary>
    public (long StartMicroseconds, double[] Sums)[] InOrder() =>
        [.. _cells.OrderBy(c => c.Key).Select(c => (c.Key * CellMicroseconds, c.Value))];

    /// <summary>Copies of the sums with cells at least this long.</summary>
    public TimeCells AtLeast(long cellMicroseconds)
    {
        var copy = new TimeCells(width, maximumCells) { CellMicroseconds = CellMicroseconds };
        foreach (var (number, sums) in _cells) copy._cells.Add(number, [.. sums]);
        while (copy.CellMicroseconds < cellMicroseconds) copy.Coarsen();
        return copy;
    }

    /// <summary>The length of cell that follows a length.</summary>
    public static long Next(long cellMicroseconds) => cellMicroseconds == 8 * Hour ? Day : 2 * cellMicroseconds;

    private void Coarsen()
    {
        var finer = _cells;
        long finerMicroseconds = CellMicroseconds;
        _cells = new Dictionary<long, double[]>(finer.Count / 2 + 1);
        CellMicroseconds = Next(finerMicroseconds);
        _lastNumber = long.MinValue;

        // In the order of time, so that the sums have one order of additions.
        foreach (var (number, sums) in finer.OrderBy(c => c.Key))
        {
            long coarse = NumberOf(number * finerMicroseconds);
            if (_cells.TryAdd(coarse, sums)) continue;
            var target = _cells[coarse];
            for (int i = 0; i < width; i++) target[i] += sums[i];
        }
    }

    private long NumberOf(long timeMicroseconds)
    {
        long number = timeMicroseconds / CellMicroseconds;
        return timeMicroseconds % CellMicroseconds < 0 ? number - 1 : number;
    }
}
