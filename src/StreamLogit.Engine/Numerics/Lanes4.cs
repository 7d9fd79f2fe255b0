using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Numerics;

/// <summary>Four doubles in a 256-bit register.</summary>
internal readonly struct Lanes4(Vector256<double> value) : ILanes<Lanes4>
{
    private readonly Vector256<double> _value = value;

    public static int Width => 4;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 Of(double value) => new(Vector256.Create(value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 Load(ref readonly double first, nuint offset) => new(Vector256.LoadUnsafe(in first, offset));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Store(ref double first, nuint offset) => _value.StoreUnsafe(ref first, offset);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 operator +(Lanes4 left, Lanes4 right) => new(left._value + right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 operator -(Lanes4 left, Lanes4 right) => new(left._value - right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 operator *(Lanes4 left, Lanes4 right) => new(left._value * right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 operator /(Lanes4 left, Lanes4 right) => new(left._value / right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 operator &(Lanes4 left, Lanes4 right) => new(left._value & right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 operator |(Lanes4 left, Lanes4 right) => new(left._value | right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 operator ^(Lanes4 left, Lanes4 right) => new(left._value ^ right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 Sqrt(Lanes4 value) => new(Vector256.Sqrt(value._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 Abs(Lanes4 value) => new(Vector256.Abs(value._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 Greater(Lanes4 left, Lanes4 right) => new(Vector256.GreaterThan(left._value, right._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 GreaterOrEqual(Lanes4 left, Lanes4 right) => new(Vector256.GreaterThanOrEqual(left._value, right._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 Select(Lanes4 mask, Lanes4 then, Lanes4 otherwise) =>
        new(Vector256.ConditionalSelect(mask._value, then._value, otherwise._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static bool Any(Lanes4 mask) => mask._value.AsInt64() != Vector256<long>.Zero;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 ShiftBitsLeft(Lanes4 value, int count) => new((value._value.AsUInt64() << count).AsDouble());

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 ShiftBitsRight(Lanes4 value, int count) => new((value._value.AsUInt64() >> count).AsDouble());

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes4 AddBits(Lanes4 left, Lanes4 right) => new((left._value.AsInt64() + right._value.AsInt64()).AsDouble());
}
