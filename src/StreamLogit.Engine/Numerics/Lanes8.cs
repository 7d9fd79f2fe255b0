using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Numerics;

/// <summary>Eight doubles in a 512-bit register.</summary>
internal readonly struct Lanes8(Vector512<double> value) : ILanes<Lanes8>
{
    private readonly Vector512<double> _value = value;

    public static int Width => 8;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 Of(double value) => new(Vector512.Create(value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 Load(ref readonly double first, nuint offset) => new(Vector512.LoadUnsafe(in first, offset));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Store(ref double first, nuint offset) => _value.StoreUnsafe(ref first, offset);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 operator +(Lanes8 left, Lanes8 right) => new(left._value + right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 operator -(Lanes8 left, Lanes8 right) => new(left._value - right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 operator *(Lanes8 left, Lanes8 right) => new(left._value * right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 operator /(Lanes8 left, Lanes8 right) => new(left._value / right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 operator &(Lanes8 left, Lanes8 right) => new(left._value & right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 operator |(Lanes8 left, Lanes8 right) => new(left._value | right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 operator ^(Lanes8 left, Lanes8 right) => new(left._value ^ right._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 Sqrt(Lanes8 value) => new(Vector512.Sqrt(value._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 Abs(Lanes8 value) => new(Vector512.Abs(value._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 Greater(Lanes8 left, Lanes8 right) => new(Vector512.GreaterThan(left._value, right._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 GreaterOrEqual(Lanes8 left, Lanes8 right) => new(Vector512.GreaterThanOrEqual(left._value, right._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 Select(Lanes8 mask, Lanes8 then, Lanes8 otherwise) =>
        new(Vector512.ConditionalSelect(mask._value, then._value, otherwise._value));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static bool Any(Lanes8 mask) => mask._value.AsInt64() != Vector512<long>.Zero;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 ShiftBitsLeft(Lanes8 value, int count) => new((value._value.AsUInt64() << count).AsDouble());

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 ShiftBitsRight(Lanes8 value, int count) => new((value._value.AsUInt64() >> count).AsDouble());

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Lanes8 AddBits(Lanes8 left, Lanes8 right) => new((left._value.AsInt64() + right._value.AsInt64()).AsDouble());
}
