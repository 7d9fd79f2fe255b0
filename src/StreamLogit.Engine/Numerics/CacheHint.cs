using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics.X86;

namespace StreamLogit.Engine.Numerics;

/// <summary>
/// Asks the processor for memory that will be read soon. Labels come for events that were scored long ago, and keys of histories in any order,
/// so that their memory is in no cache; asked for some records ahead, it is there in time. Changes no result; does nothing where the processor has no such instruction for us.
/// </summary>
internal static class CacheHint
{
    private const int LineBytes = 64;

    /// <summary>Asks for the cache line of a value.</summary>
    public static unsafe void Want<T>(ref readonly T value)
    {
        // Only a hint: should the collector move the object meanwhile, the wrong line comes and nothing else happens.
        if (Sse.IsSupported) Sse.Prefetch0(Unsafe.AsPointer(ref Unsafe.AsRef(in value)));
    }

    /// <summary>Asks for the cache lines of some doubles.</summary>
    public static void Want(ReadOnlySpan<double> values)
    {
        for (int i = 0; i < values.Length; i += LineBytes / sizeof(double)) Want(in values[i]);
    }

    /// <summary>Asks for some bytes from an offset on.</summary>
    public static void Want(byte[] bytes, int offset, int length)
    {
        for (int end = Math.Min(offset + length, bytes.Length); offset < end; offset += LineBytes) Want(in bytes[offset]);
    }
}
