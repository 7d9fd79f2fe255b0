using System.Runtime.InteropServices;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health.Detection;

/// <summary>
/// The adaptive window ADWIN2 of Bifet &amp; Gavaldà (Learning from Time-Varying Data with Adaptive Windowing, SDM 2007): it grows while the mean of observations
/// between 0 and 1 stays, and drops its older part as soon as two parts differ by more than chance allows. While the mean stays, each check cuts with a
/// probability of at most delta.
/// </summary>
/// <remarks>
/// The window is kept as an exponential histogram: at most <see cref="RunsPerSize"/> runs of each size, where a size is twice the one before. Memory grows with the
/// logarithm of the window.
/// </remarks>
public sealed class Adwin
{
    private const int RunsPerSize = 5;
    private const int Sizes = 48;

    private readonly double _delta;
    private readonly AdwinRun[] _runs = new AdwinRun[Sizes * (RunsPerSize + 1)]; // per size, oldest first
    private readonly int[] _counts = new int[Sizes];
    private AdwinRun _window;

    /// <param name="delta">The probability of a cut at a check while the mean stays, above 0 and below 1.</param>
    public Adwin(double delta)
    {
        if (!(delta > 0 && delta < 1)) throw new ArgumentOutOfRangeException(nameof(delta), delta, "delta must lie between 0 and 1.");
        _delta = delta;
    }

    /// <summary>Observations in the window.</summary>
    public long Count => _window.Count;

    /// <summary>Their mean.</summary>
    public double Mean => _window.Sum / _window.Count;

    /// <summary>Takes in an observation between 0 and 1.</summary>
    public void Add(double observation, long timeMicroseconds) =>
        AddRun(new AdwinRun { Sum = observation, Count = 1, StartMicroseconds = timeMicroseconds });

    /// <summary>Looks for a cut and drops what lies before it.</summary>
    public AdwinCut? Check()
    {
        // With w the window's length and m = 1 / (1/before + 1/after), the parts differ by more than chance where
        // |difference| > sqrt(2/m variance ln(2 ln(w)/delta)) + 2/(3m) ln(2 ln(w)/delta).
        if (Count < 2) return null;
        AdwinCut? found = null;
        bool isCut = true;
        while (isCut && Count >= 2)
        {
            isCut = false;
            double logarithm = Elementary.Log(2 * Elementary.Log(Math.Max(Count, 3)) / _delta);
            double variance = _window.SumOfSquares / Count;
            double sumBefore = 0;
            long countBefore = 0;
            for (int size = Sizes - 1; size >= 0 && !isCut; size--)
                for (int i = 0; i < _counts[size] && !isCut; i++)
                {
                    ref readonly var run = ref _runs[size * (RunsPerSize + 1) + i];
                    sumBefore += run.Sum;
                    countBefore += run.Count;
                    long countAfter = Count - countBefore;
                    if (countAfter == 0) break;
                    double perBefore = 1.0 / countBefore, perAfter = 1.0 / countAfter;
                    double meanBefore = sumBefore * perBefore, meanAfter = (_window.Sum - sumBefore) * perAfter;
                    double perCount = perBefore + perAfter;
                    double excess = Math.Abs(meanBefore - meanAfter) - 2.0 / 3 * perCount * logarithm;
                    if (!(excess > 0) || !(excess * excess > 2 * perCount * variance * logarithm)) continue;
                    isCut = true;
                    // Several cuts in one check are one change, told by the last.
                    found = new AdwinCut(meanBefore, meanAfter, countBefore, countAfter, StartAfter(size, i));
                    DropThrough(size, i);
                }
        }
        return found;
    }

    /// <summary>Takes in a run whose length is a power of two, as one.</summary>
    internal void AddRun(in AdwinRun run)
    {
        _window = _window.With(run);
        int size = long.Log2(run.Count) is var log && log < Sizes ? (int)log : Sizes - 1;
        Append(size, run);
        for (; size < Sizes - 1 && _counts[size] > RunsPerSize; size++)
        {
            int first = size * (RunsPerSize + 1);
            var joined = _runs[first].With(_runs[first + 1]);
            _counts[size] -= 2;
            _runs.AsSpan(first + 2, _counts[size]).CopyTo(_runs.AsSpan(first));
            Append(size + 1, joined);
        }
    }

    internal void Save(BinaryWriter writer)
    {
        foreach (int count in _counts) writer.Write((byte)count);
        for (int size = 0; size < Sizes; size++)
            writer.Write(MemoryMarshal.AsBytes(_runs.AsSpan(size * (RunsPerSize + 1), _counts[size])));
        writer.Write(MemoryMarshal.AsBytes(MemoryMarshal.CreateReadOnlySpan(ref _window, 1)));
    }

    internal void Load(BinaryReader reader)
    {
        for (int size = 0; size < Sizes; size++) _counts[size] = reader.ReadByte();
        for (int size = 0; size < Sizes; size++)
            reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(_runs.AsSpan(size * (RunsPerSize + 1), _counts[size])));
        reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(MemoryMarshal.CreateSpan(ref _window, 1)));
    }

    private void Append(int size, in AdwinRun run) => _runs[size * (RunsPerSize + 1) + _counts[size]++] = run;

    private long StartAfter(int size, int index)
    {
        if (index + 1 < _counts[size]) return _runs[size * (RunsPerSize + 1) + index + 1].StartMicroseconds;
        for (size--; size >= 0; size--)
            if (_counts[size] > 0) return _runs[size * (RunsPerSize + 1)].StartMicroseconds;
        return _window.StartMicroseconds;
    }

    /// <summary>Drops the oldest runs up to and including this one and sums the window anew.</summary>
    private void DropThrough(int size, int index)
    {
        for (int larger = Sizes - 1; larger > size; larger--) _counts[larger] = 0;
        int first = size * (RunsPerSize + 1);
        _counts[size] -= index + 1;
        _runs.AsSpan(first + index + 1, _counts[size]).CopyTo(_runs.AsSpan(first));
        _window = new AdwinRun();
        for (int kept = size; kept >= 0; kept--)
            for (int i = 0; i < _counts[kept]; i++) _window = _window.With(_runs[kept * (RunsPerSize + 1) + i]);
    }
}
