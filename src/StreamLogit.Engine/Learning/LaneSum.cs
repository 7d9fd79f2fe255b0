using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// Sums over the places of a row, in one order on every width: first every eighth place, from the front, then the eight sums pairwise,
/// those four apart, two apart and one apart.
/// </summary>
internal static class LaneSum
{
    /// <summary>The sum of a[i] b[i] over a row of 1, 2, 4 or a multiple of 8 places.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static double OfProducts<T>(ref readonly double a, ref readonly double b, nuint length) where T : struct, ILanes<T>
    {
        Unsafe.SkipInit(out EightDoubles sums);
        ref double first = ref Unsafe.As<EightDoubles, double>(ref sums);
        nuint columns = length < 8 ? length : 8;
        for (nuint column = 0; column < columns; column += (nuint)T.Width)
        {
            T sum = T.Load(in a, column) * T.Load(in b, column);
            for (nuint place = column + 8; place < length; place += 8) sum += T.Load(in a, place) * T.Load(in b, place);
            sum.Store(ref first, column);
        }
        if (length == 1) return first;
        if (length == 2) return first + Unsafe.Add(ref first, 1);
        if (length > 4)
            for (int i = 0; i < 4; i++) Unsafe.Add(ref first, i) += Unsafe.Add(ref first, i + 4);
        return first + Unsafe.Add(ref first, 2) + (Unsafe.Add(ref first, 1) + Unsafe.Add(ref first, 3));
    }

    [InlineArray(8)]
    [StructLayout(LayoutKind.Sequential)]
    private struct EightDoubles
    {
        private double _first;
    }
}
