namespace StreamLogit.Engine.Numerics;

/// <summary>
/// Some doubles that one instruction works on. A kernel is written once against this interface and runs on every width;
/// each lane sees the same operations in the same order, so every width gives the same bits.
/// </summary>
/// <remarks>
/// Only correctly rounded operations (+ - * / square root) and bit operations belong here: no fused multiply-add, no estimate,
/// no sum over lanes.
/// </remarks>
internal interface ILanes<TSelf> where TSelf : struct, ILanes<TSelf>
{
    /// <summary>How many doubles.</summary>
    static abstract int Width { get; }

    /// <summary>The value in every lane.</summary>
    static abstract TSelf Of(double value);

    /// <summary>The doubles from <paramref name="offset"/> doubles after <paramref name="first"/> on.</summary>
    static abstract TSelf Load(ref readonly double first, nuint offset);

    /// <summary>Writes the lanes from <paramref name="offset"/> doubles after <paramref name="first"/> on.</summary>
    void Store(ref double first, nuint offset);

    static abstract TSelf operator +(TSelf left, TSelf right);
    static abstract TSelf operator -(TSelf left, TSelf right);
    static abstract TSelf operator *(TSelf left, TSelf right);
    static abstract TSelf operator /(TSelf left, TSelf right);

    /// <summary>The bits of both.</summary>
    static abstract TSelf operator &(TSelf left, TSelf right);

    /// <summary>The bits of either.</summary>
    static abstract TSelf operator |(TSelf left, TSelf right);

    /// <summary>The bits of one of them only.</summary>
    static abstract TSelf operator ^(TSelf left, TSelf right);

    /// <summary>Correctly rounded square root.</summary>
    static abstract TSelf Sqrt(TSelf value);

    /// <summary>Without the sign.</summary>
    static abstract TSelf Abs(TSelf value);

    /// <summary>A mask: all bits where <paramref name="left"/> &gt; <paramref name="right"/>, else none.</summary>
    static abstract TSelf Greater(TSelf left, TSelf right);

    /// <summary>A mask: all bits where <paramref name="left"/> &gt;= <paramref name="right"/>, else none.</summary>
    static abstract TSelf GreaterOrEqual(TSelf left, TSelf right);

    /// <summary><paramref name="then"/> where the mask is set, else <paramref name="otherwise"/>.</summary>
    static abstract TSelf Select(TSelf mask, TSelf then, TSelf otherwise);

    /// <summary>Whether the mask is set in any lane.</summary>
    static abstract bool Any(TSelf mask);

    /// <summary>The 64 bits of each lane moved up.</summary>
    static abstract TSelf ShiftBitsLeft(TSelf value, int count);

    /// <summary>The 64 bits of each lane moved down, zeros coming in.</summary>
    static abstract TSelf ShiftBitsRight(TSelf value, int count);

    /// <summary>The 64 bits of each lane added as integers that wrap.</summary>
    static abstract TSelf AddBits(TSelf left, TSelf right);
}
