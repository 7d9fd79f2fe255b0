using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Numerics;

/// <summary>Two doubles in a 128-bit register.</summary>
internal readonly struct Lanes2(Vector128<double> value) : ILanes<Lanes2>
{
    private readonly Vector128<double> _value = value;

    public static int Width => 2;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 Of(double value) => new(Vector128.Create(value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 Load(ref readonly double first, nuint offset) => new(Vector128.LoadUnsafe(in first, offset));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Store(ref double first, nuint offset) => _value.StoreUnsafe(ref first, offset);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 operator +(Lanes2 left, Lanes2 right) => new(left._value + right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 operator -(Lanes2 left, Lanes2 right) => new(left._value - right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 operator *(Lanes2 left, Lanes2 right) => new(left._value * right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 operator /(Lanes2 left, Lanes2 right) => new(left._value / right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 operator &(Lanes2 left, Lanes2 right) => new(left._value & right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 operator |(Lanes2 left, Lanes2 right) => new(left._value | right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 operator ^(Lanes2 left, Lanes2 right) => new(left._value ^ right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 Sqrt(Lanes2 value) => new(Vector128.Sqrt(value._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 Abs(Lanes2 value) => new(Vector128.Abs(value._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 Greater(Lanes2 left, Lanes2 right) => new(Vector128.GreaterThan(left._value, right._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 GreaterOrEqual(Lanes2 left, Lanes2 right) => new(Vector128.GreaterThanOrEqual(left._value, right._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 Select(Lanes2 mask, Lanes2 then, Lanes2 otherwise) =>
        new(Vector128.ConditionalSelect(mask._value, then._value, otherwise._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static bool Any(Lanes2 mask) => mask._value.AsInt64() != Vector128<long>.Zero;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 ShiftBitsLeft(Lanes2 value, int count) => new((value._value.AsUInt64() << count).AsDouble());

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 ShiftBitsRight(Lanes2 value, int count) => new((value._value.AsUInt64() >> count).AsDouble());

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes2 AddBits(Lanes2 left, Lanes2 right) => new((left._value.AsInt64() + right._value.AsInt64()).AsDouble());
}
