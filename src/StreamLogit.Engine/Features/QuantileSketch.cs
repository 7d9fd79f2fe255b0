using System.Numerics;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Features;

/// <summary>
/// The running quantiles of a stream of numbers in bounded memory: which share of the numbers so far lies below a number. The share is off by at most
/// 0.02 in 99 of 100 cases, and exact for the first 255 numbers.
/// </summary>
/// <remarks>
/// The sketch of equal buffers of Agarwal, Cormode, Huang, Phillips, Wei and Yi (Mergeable summaries, PODS 2012): the lowest level takes 256 numbers; of a full
/// level every other number goes up to the next, where each counts twice as much. Whether the odd or the even ones go is a bit of a fixed pseudo-random
/// sequence. So the standard error of a rank is at most sqrt(2) / 256. Look-ups go to one merged list of all levels but the lowest, which is made anew when the
/// numbers have grown by a 256th, so that it lacks at most so many of the newest.
/// </remarks>
internal sealed class QuantileSketch
{
    private const int Size = 256;
    private const int Half = Size / 2;
    private const int Levels = 48;

    private readonly double[] _newest = new double[Size]; // sorted
    private readonly double[]?[] _levels = new double[Levels][]; // each number of level i counts 2^(i + 1); a level in use has Half of them, sorted
    private readonly double[] _full = new double[Size];
    private readonly double[] _half = new double[Half];
    private ulong _inUse; // a bit for each level
    private double[] _merged = [];
    private double[] _weightsUpTo = []; // for each merged number, what it and all before it count
    private int _newestCount;
    private int _mergedCount;
    private long _taken; // numbers that have left the lowest level
    private long _takenAtMerge;
    private ulong _compactions;

    /// <summary>The share of the numbers so far that are smaller, of equal ones half; 0.5 before the first.</summary>
    public double ShareBelow(double number)
    {
        var newest = _newest.AsSpan(0, _newestCount);
        var merged = _merged.AsSpan(0, _mergedCount);
        double weight = WeightOfFirst(_mergedCount) + _newestCount;
        if (weight == 0) return 0.5;
        double twiceBelow = SortedNumbers.Below(newest, number) + SortedNumbers.NotAbove(newest, number)
            + WeightOfFirst(SortedNumbers.Below(merged, number)) + WeightOfFirst(SortedNumbers.NotAbove(merged, number));
        return twiceBelow / (2 * weight);
    }

    public void Add(double number)
    {
        int place = SortedNumbers.NotAbove(_newest.AsSpan(0, _newestCount), number);
        _newest.AsSpan(place, _newestCount - place).CopyTo(_newest.AsSpan(place + 1));
        _newest[place] = number;
        if (++_newestCount < Size) return;
        _newestCount = 0;
        _taken += Size;
        Raise();
        if (_taken - _takenAtMerge >= _takenAtMerge / Size) Merge();
    }

    public void Save(BinaryWriter writer)
    {
        writer.Write(_taken);
        writer.Write(_takenAtMerge);
        writer.Write(_compactions);
        writer.Write(_inUse);
        writer.Write(_newestCount);
        writer.Write(_mergedCount);
        writer.Write(MemoryMarshal.AsBytes(_newest.AsSpan(0, _newestCount)));
        for (int level = 0; level < Levels; level++)
            if (IsInUse(level)) writer.Write(MemoryMarshal.AsBytes(_levels[level].AsSpan()));
        writer.Write(MemoryMarshal.AsBytes(_merged.AsSpan(0, _mergedCount)));
        writer.Write(MemoryMarshal.AsBytes(_weightsUpTo.AsSpan(0, _mergedCount)));
    }

    public void Load(BinaryReader reader)
    {
        _taken = reader.ReadInt64();
        _takenAtMerge = reader.ReadInt64();
        _compactions = reader.ReadUInt64();
        _inUse = reader.ReadUInt64();
        _newestCount = reader.ReadInt32();
        _mergedCount = reader.ReadInt32();
        Read(_newest.AsSpan(0, _newestCount));
        for (int level = 0; level < Levels; level++)
            if (IsInUse(level)) Read(_levels[level] = new double[Half]);
        _merged = new double[_mergedCount];
        _weightsUpTo = new double[_mergedCount];
        Read(_merged);
        Read(_weightsUpTo);

        void Read(Span<double> numbers)
        {
            var bytes = MemoryMarshal.AsBytes(numbers);
            if (reader.Read(bytes) != bytes.Length) throw new InvalidStateException("a quantile sketch is cut short");
        }
    }

    private bool IsInUse(int level) => (_inUse >> level & 1) != 0;

    private double WeightOfFirst(int count) => count == 0 ? 0 : _weightsUpTo[count - 1];

    /// <summary>Takes every other number of the full lowest level up, and so on while the next level becomes full by it.</summary>
    private void Raise()
    {
        Compact(_newest);
        int level = 0;
        for (; IsInUse(level); level++)
        {
            SortedNumbers.Merge(_levels[level], _half, _full);
            Compact(_full);
            _inUse &= ~(1ul << level);
        }
        _half.CopyTo(_levels[level] ??= new double[Half], 0);
        _inUse |= 1ul << level;
    }

    private void Compact(double[] full)
    {
        int first = (int)(HashedSlots.Combine(++_compactions, HashedSlots.MissingValue) & 1);
        for (int i = 0; i < Half; i++) _half[i] = full[2 * i + first];
    }

    private void Merge()
    {
        _takenAtMerge = _taken;
        int total = BitOperations.PopCount(_inUse) * Half;
        if (_merged.Length < total)
        {
            _merged = new double[total];
            _weightsUpTo = new double[total];
        }
        _mergedCount = 0;
        for (int level = 0; level < Levels; level++)
            if (IsInUse(level)) MergeIn(_levels[level]!, Math.ScaleB(2, level));
        for (int i = 1; i < _mergedCount; i++) _weightsUpTo[i] += _weightsUpTo[i - 1];
    }

    // From the back, so that nothing is overwritten before it has moved.
    private void MergeIn(double[] level, double weight)
    {
        int old = _mergedCount - 1, added = level.Length - 1;
        _mergedCount += level.Length;
        for (int place = _mergedCount - 1; added >= 0; place--)
        {
            bool takesOld = old >= 0 && _merged[old] > level[added];
            _merged[place] = takesOld ? _merged[old] : level[added];
            _weightsUpTo[place] = takesOld ? _weightsUpTo[old--] : weight;
            if (!takesOld) added--;
        }
    }
}
