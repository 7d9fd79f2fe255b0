using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Numerics;

/// <summary>One double: the path of machines without vector registers, and of single values.</summary>
/// <remarks>Where there are vector registers, masks and bits stay in them: the way to the integer registers and back is slow, and so are branches.</remarks>
internal readonly struct Lanes1(double value) : ILanes<Lanes1>
{
    /// <summary>The double.</summary>
    public readonly double Value = value;

    public static int Width => 1;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 Of(double value) => new(value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 Load(ref readonly double first, nuint offset) => new(Unsafe.Add(ref Unsafe.AsRef(in first), offset));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Store(ref double first, nuint offset) => Unsafe.Add(ref first, offset) = Value;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 operator +(Lanes1 left, Lanes1 right) => new(left.Value + right.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 operator -(Lanes1 left, Lanes1 right) => new(left.Value - right.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 operator *(Lanes1 left, Lanes1 right) => new(left.Value * right.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 operator /(Lanes1 left, Lanes1 right) => new(left.Value / right.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 operator &(Lanes1 left, Lanes1 right) => Vector128.IsHardwareAccelerated
        ? new((Vector(left) & Vector(right)).ToScalar())
        : FromBits(Bits(left) & Bits(right));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 operator |(Lanes1 left, Lanes1 right) => Vector128.IsHardwareAccelerated
        ? new((Vector(left) | Vector(right)).ToScalar())
        : FromBits(Bits(left) | Bits(right));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 operator ^(Lanes1 left, Lanes1 right) => Vector128.IsHardwareAccelerated
        ? new((Vector(left) ^ Vector(right)).ToScalar())
        : FromBits(Bits(left) ^ Bits(right));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 Sqrt(Lanes1 value) => new(Math.Sqrt(value.Value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 Abs(Lanes1 value) => new(Math.Abs(value.Value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 Greater(Lanes1 left, Lanes1 right) => Vector128.IsHardwareAccelerated
        ? new(Vector128.GreaterThan(Vector(left), Vector(right)).ToScalar())
        : Mask(left.Value > right.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 GreaterOrEqual(Lanes1 left, Lanes1 right) => Vector128.IsHardwareAccelerated
        ? new(Vector128.GreaterThanOrEqual(Vector(left), Vector(right)).ToScalar())
        : Mask(left.Value >= right.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 Select(Lanes1 mask, Lanes1 then, Lanes1 otherwise) => Vector128.IsHardwareAccelerated
        ? new(Vector128.ConditionalSelect(Vector(mask), Vector(then), Vector(otherwise)).ToScalar())
        : Any(mask) ? then : otherwise;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static bool Any(Lanes1 mask) => Bits(mask) != 0;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 ShiftBitsLeft(Lanes1 value, int count) => Vector128.IsHardwareAccelerated
        ? new((Vector(value).AsUInt64() << count).AsDouble().ToScalar())
        : FromBits(Bits(value) << count);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 ShiftBitsRight(Lanes1 value, int count) => Vector128.IsHardwareAccelerated
        ? new((Vector(value).AsUInt64() >> count).AsDouble().ToScalar())
        : FromBits(Bits(value) >> count);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes1 AddBits(Lanes1 left, Lanes1 right) => Vector128.IsHardwareAccelerated
        ? new((Vector(left).AsUInt64() + Vector(right).AsUInt64()).AsDouble().ToScalar())
        : FromBits(unchecked(Bits(left) + Bits(right)));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector128<double> Vector(Lanes1 value) => Vector128.CreateScalarUnsafe(value.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static ulong Bits(Lanes1 value) => BitConverter.DoubleToUInt64Bits(value.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Lanes1 FromBits(ulong bits) => new(BitConverter.UInt64BitsToDouble(bits));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Lanes1 Mask(bool condition) => FromBits(condition ? ulong.MaxValue : 0);
}
