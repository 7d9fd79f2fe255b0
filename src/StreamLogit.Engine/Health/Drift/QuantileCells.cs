using System.Numerics;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Health.Drift;

/// <summary>
/// Cells for the values of a number, cut at the quantiles of its first values, so that each holds about as many of them. A value that repeats often cuts once.
/// Until the cuts are known the first values wait.
/// </summary>
internal sealed class QuantileCells
{
    /// <summary>The most cells.</summary>
    public const int Count = 32;

    private const int FirstValues = 512;

    private readonly double[] _waiting = new double[FirstValues];
    private readonly double[] _waitingWeights = new double[FirstValues];
    private readonly double[] _cuts = new double[Count]; // cell k holds values from _cuts[k - 1] to below _cuts[k]; NaN behind the last cut
    private int _waitingCount;

    public bool IsCut { get; private set; }

    /// <summary>Values that wait for the cuts, with their weights.</summary>
    public ReadOnlySpan<double> Waiting => _waiting.AsSpan(0, _waitingCount);

    public ReadOnlySpan<double> WaitingWeights => _waitingWeights.AsSpan(0, _waitingCount);

    /// <summary>Keeps a value until the cuts are known.</summary>
    /// <returns>Whether they are known now. Then the caller counts what waited and calls <see cref="ForgetWaiting"/>.</returns>
    public bool Wait(double value, double weight)
    {
        _waiting[_waitingCount] = value;
        _waitingWeights[_waitingCount++] = weight;
        if (_waitingCount < FirstValues) return false;
        var sorted = Waiting.ToArray();
        Array.Sort(sorted);
        var cuts = new SortedSet<double>();
        for (int k = 1; k < Count; k++)
            if (sorted[k * FirstValues / Count] > sorted[0]) cuts.Add(sorted[k * FirstValues / Count]);
        // A constant so far is told apart from everything above it.
        if (cuts.Count == 0) cuts.Add(double.BitIncrement(sorted[0]));
        Array.Fill(_cuts, double.NaN);
        cuts.CopyTo(_cuts);
        return IsCut = true;
    }

    public void ForgetWaiting() => _waitingCount = 0;

    /// <summary>How many cuts are not above the value. All are compared: which way a search would go nobody could predict.</summary>
    public int CellOf(double value)
    {
        var searched = Vector256.Create(value);
        ref double first = ref MemoryMarshal.GetArrayDataReference(_cuts);
        int count = 0;
        for (int i = 0; i < Count; i += Vector256<double>.Count)
            count += BitOperations.PopCount(Vector256.GreaterThanOrEqual(searched, Vector256.LoadUnsafe(ref first, (nuint)i)).ExtractMostSignificantBits());
        return count;
    }

    public void Save(BinaryWriter writer)
    {
        writer.Write(IsCut);
        writer.Write(MemoryMarshal.AsBytes(_cuts.AsSpan()));
        writer.Write(_waitingCount);
        writer.Write(MemoryMarshal.AsBytes(Waiting));
        writer.Write(MemoryMarshal.AsBytes(WaitingWeights));
    }

    public void Load(BinaryReader reader)
    {
        IsCut = reader.ReadBoolean();
        reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(_cuts.AsSpan()));
        _waitingCount = reader.ReadInt32();
        reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(_waiting.AsSpan(0, _waitingCount)));
        reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(_waitingWeights.AsSpan(0, _waitingCount)));
    }
}
