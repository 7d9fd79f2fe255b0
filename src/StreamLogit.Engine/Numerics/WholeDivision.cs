using System.Runtime.CompilerServices;

namespace StreamLogit.Engine.Numerics;

/// <summary>Division of whole numbers.</summary>
internal static class WholeDivision
{
    /// <summary>The quotient rounded down, also below 0, where the operator rounds up.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static long Floor(long value, long divisor)
    {
        long quotient = Math.DivRem(value, divisor, out long rest);
        return rest < 0 ? quotient - 1 : quotient;
    }
}
