using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// Doubles that start at a cache line and stay in their place, all zero at first. Registers of eight doubles that reach over two cache lines
/// cost up to three times as much.
/// </summary>
internal sealed unsafe class AlignedDoubles
{
    private const int CacheLineBytes = 64;

    // Pinned, so that the pointer into it stays right as long as this object lives.
    private readonly double[] _memory;
    private readonly double* _first;

    /// <param name="length">Doubles, at most what an array can hold less a cache line.</param>
    public AlignedDoubles(int length)
    {
        Length = length;
        _memory = GC.AllocateArray<double>(length + CacheLineBytes / sizeof(double), pinned: true);
        nint address = (nint)Unsafe.AsPointer(ref MemoryMarshal.GetArrayDataReference(_memory));
        _first = (double*)(address + (-address & (CacheLineBytes - 1)));
    }

    public int Length { get; }

    public ref double First
    {
        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        get => ref *_first;
    }

    public Span<double> Span => new(_first, Length);

    public ref double this[int index] => ref Span[index];
}
