using System.Runtime.InteropServices;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health.RollUps;

/// <summary>
/// Sums over time: a fixed row of numbers and a tally in buckets of minutes that roll up into longer and longer ones, and over all time.
/// Memory is bounded by what is kept of each level. Every sum has one order of additions, so the bits do not depend on when somebody looks or saves.
/// </summary>
internal sealed class RollUp
{
    private readonly string _part;
    private readonly int _width;
    private readonly RollUpLevel[] _levels;
    private readonly double[] _totalNumbers;
    private readonly Tally _totalTally;
    private readonly List<(string Part, long Number)> _obsolete = [];

    /// <param name="part">The part of the state in which it is kept.</param>
    /// <param name="numbers">Numbers of a bucket.</param>
    /// <param name="cells">Cells of a bucket's tally.</param>
    /// <param name="width">Doubles of a cell.</param>
    /// <param name="cellsPerTallyAtFirst">Room at first for each closed tally, in cells.</param>
    /// <param name="levels">The levels from the shortest buckets to the longest.</param>
    public RollUp(string part, int numbers, int cells, int width, int cellsPerTallyAtFirst, params ReadOnlySpan<RollUpRetention> levels)
    {
        _part = part;
        _width = width;
        _levels = new RollUpLevel[levels.Length];
        for (int i = 0; i < levels.Length; i++) _levels[i] = new RollUpLevel(levels[i], numbers, cells, width, cellsPerTallyAtFirst);
        _totalNumbers = new double[numbers];
        _totalTally = new Tally(cells, width);
    }

    public ReadOnlySpan<RollUpLevel> Levels => _levels;

    /// <summary>A number that changes when a bucket is closed, or a closed one changed.</summary>
    public long Revision { get; private set; }

    /// <summary>The numbers of the open bucket, to be added to.</summary>
    public Span<double> Numbers => _levels[0].Numbers;

    /// <summary>The tally of the open bucket, to be added to.</summary>
    public Tally Tally => _levels[0].Tally;

    /// <summary>Opens the bucket of a minute that is not before the open one; what was open is closed and rolled up.</summary>
    public void MoveTo(long minute)
    {
        long bucket = WholeDivision.Floor(minute, _levels[0].Minutes);
        if (bucket == _levels[0].OpenBucket) return;
        if (!_levels[0].IsOpenEmpty)
        {
            Revision++;
            Close(0);
        }
        _levels[0].OpenNext(bucket);
    }

    /// <summary>
    /// Adds up the window of so many minutes that ends with a minute. It starts at a full bucket of the shortest level whose tallies reach back far enough, so it may be
    /// longer than asked by up to a bucket.
    /// </summary>
    /// <returns>The minute at which it starts.</returns>
    public long Window(long lastMinute, long minutes, Span<double> numbers, Tally tally)
    {
        int level = 0;
        while (level < _levels.Length - 1 && (long)_levels[level].TalliesKept * _levels[level].Minutes < minutes) level++;
        var buckets = _levels[level];
        long first = WholeDivision.Floor(lastMinute - minutes + 1, buckets.Minutes);
        for (long closed = buckets.FirstFrom(first); closed < buckets.Closed; closed++)
        {
            NumberRow.Add(numbers, buckets.NumbersOf(closed));
            buckets.AddTallyOf(closed, tally);
        }
        long start = first * buckets.Minutes;
        for (; level >= 0; level--)
        {
            var open = _levels[level];
            if (open.OpenBucket * open.Minutes < start) continue;
            NumberRow.Add(numbers, open.Numbers);
            tally.Add(open.Tally);
        }
        return start;
    }

    /// <summary>Adds up all time.</summary>
    public void Total(Span<double> numbers, Tally tally)
    {
        NumberRow.Add(numbers, _totalNumbers);
        tally.Add(_totalTally);
        for (int level = _levels.Length - 1; level >= 0; level--)
        {
            NumberRow.Add(numbers, _levels[level].Numbers);
            tally.Add(_levels[level].Tally);
        }
    }

    /// <summary>
    /// Adds to the numbers and to a cell of a bucket that may be closed and rolled up since, wherever it still is. A minute without a shortest bucket of its own
    /// belongs to the one before it.
    /// </summary>
    public void Change(long minute, ReadOnlySpan<double> numbers, int cell, ReadOnlySpan<double> values)
    {
        Revision++;
        foreach (var level in _levels)
        {
            bool isShortest = level == _levels[0];
            long bucket = WholeDivision.Floor(minute, level.Minutes);
            if (level.OpenBucket == bucket || (isShortest && level.OpenBucket < bucket))
            {
                NumberRow.Add(level.Numbers, numbers);
                level.Tally.Add(cell, values);
                return; // nothing longer has it yet
            }
            long closed = isShortest ? level.FirstFrom(bucket + 1) - 1 : level.FirstFrom(bucket);
            if (closed < level.FirstKept || closed >= level.Closed || (!isShortest && level.BucketNumber(closed) != bucket)) continue;
            NumberRow.Add(level.NumbersOf(closed), numbers);
            var found = level.FindCell(closed, cell);
            if (!found.IsEmpty) NumberRow.Add(found, values);
            level.MarkChanged(closed);
        }
        NumberRow.Add(_totalNumbers, numbers);
        _totalTally.Add(cell, values);
    }

    /// <summary>Says that all blocks that it may have saved are gone.</summary>
    public void RemoveFrom(StateBlocks changes)
    {
        changes.Remove(_part, 0);
        foreach (var level in _levels)
            for (long place = 0; place < Math.Min(level.Closed, level.BucketsKept); place++) changes.Remove(PartOf(level.Minutes), place);
    }

    public void Save(StateBlocks changes)
    {
        foreach (var (part, number) in _obsolete) changes.Remove(part, number);
        _obsolete.Clear();
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(_totalNumbers.Length);
        writer.Write(_totalTally.Cells);
        writer.Write(_width);
        writer.Write(MemoryMarshal.AsBytes(_totalNumbers.AsSpan()));
        _totalTally.Save(writer);
        writer.Write(_levels.Length);
        foreach (var level in _levels)
        {
            writer.Write(level.Minutes);
            writer.Write(level.OpenBucket);
            writer.Write(MemoryMarshal.AsBytes(level.Numbers.AsSpan()));
            level.Tally.Save(writer);
            level.Save(PartOf(level.Minutes), changes);
        }
        changes.Put(_part, 0, bytes.ToArray());
    }

    /// <summary>Takes up a saved state; nothing where there is none, or where its buckets hold something else.</summary>
    /// <param name="state">The state.</param>
    /// <param name="places">For each saved number its place now, or -1 where it is gone; empty where they are the same.</param>
    /// <returns>Whether it was taken up.</returns>
    public bool Load(StateBlocks state, ReadOnlySpan<int> places = default)
    {
        if (state.Find(_part, 0) is not { } bytes) return false;
        using var reader = new BinaryReader(new MemoryStream(bytes));
        int numbers = reader.ReadInt32();
        if (numbers != (places.IsEmpty ? _totalNumbers.Length : places.Length)) return false;
        if (reader.ReadInt32() != _totalTally.Cells || reader.ReadInt32() != _width) return false;
        NumberRow.Read(reader, _totalNumbers, places);
        _totalTally.Load(reader);
        for (int count = reader.ReadInt32(); count > 0; count--)
        {
            int minutes = reader.ReadInt32();
            var level = Array.Find(_levels, known => known.Minutes == minutes);
            // Buckets of a length that is not kept any more are read and left behind.
            if (level is null) foreach (var (number, _) in state.Read(PartOf(minutes))) _obsolete.Add((PartOf(minutes), number));
            level ??= new RollUpLevel(new RollUpRetention(minutes, 1, 0), _totalNumbers.Length, _totalTally.Cells, _width, cellsPerTallyAtFirst: 0);
            long open = reader.ReadInt64();
            var obsolete = new SortedSet<long>();
            level.Load(PartOf(minutes), state, places, obsolete);
            foreach (long number in obsolete) _obsolete.Add((PartOf(minutes), number));
            level.OpenNext(open);
            NumberRow.Read(reader, level.Numbers, places);
            level.Tally.Load(reader);
            if (Array.IndexOf(_levels, level) >= 0) continue;
            NumberRow.Add(_totalNumbers, level.Numbers);
            _totalTally.Add(level.Tally);
        }
        Revision++;
        return true;
    }

    private string PartOf(int minutes) => FormattableString.Invariant($"{_part}/{minutes}m");

    /// <summary>Closes the open bucket of a level and adds it to the open one of the next level, or to all time.</summary>
    private void Close(int index)
    {
        var level = _levels[index];
        level.Close();
        if (index + 1 == _levels.Length)
        {
            NumberRow.Add(_totalNumbers, level.Numbers);
            _totalTally.Add(level.Tally);
            return;
        }
        var next = _levels[index + 1];
        long bucket = WholeDivision.Floor(level.OpenBucket, next.Minutes / level.Minutes);
        if (bucket != next.OpenBucket)
        {
            if (!next.IsOpenEmpty) Close(index + 1);
            next.OpenNext(bucket);
        }
        NumberRow.Add(next.Numbers, level.Numbers);
        next.Tally.Add(level.Tally);
    }
}
