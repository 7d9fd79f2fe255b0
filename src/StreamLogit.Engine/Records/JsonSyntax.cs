using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Records;

/// <summary>The grammar of JSON below objects and arrays (RFC 8259), over bytes that are known to be UTF-8.</summary>
/// <remarks>
/// Nothing here looks for the end of a record: a NUL stands behind every record of a batch, it fits nowhere in the grammar, and all
/// loops stop at it. Reads may reach further than that, within <see cref="RecordBatch.Padding"/>.
/// Methods return the place behind what they read, or null after telling the fault.
/// </remarks>
internal static unsafe class JsonSyntax
{
    private static readonly uint Null = MemoryMarshal.Read<uint>("null"u8);
    private static readonly uint True = MemoryMarshal.Read<uint>("true"u8);
    private static readonly uint AlseOfFalse = MemoryMarshal.Read<uint>("alse"u8);

    /// <summary>The first byte that is not white space.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static byte* SkipSpace(byte* at) => *at > ' ' ? at : SlowSkipSpace(at);

    [MethodImpl(MethodImplOptions.NoInlining)]
    private static byte* SlowSkipSpace(byte* at)
    {
        while (*at is (byte)' ' or (byte)'\n' or (byte)'\r' or (byte)'\t') at++;
        return at;
    }

    /// <summary>The closing quote of a string.</summary>
    /// <param name="at">Behind the opening quote.</param>
    /// <param name="fault">Told what is wrong.</param>
    /// <param name="isEscaped">Whether the string has escapes.</param>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static byte* StringEnd(byte* at, JsonFault fault, out bool isEscaped)
    {
        at = FindSpecial(at);
        isEscaped = false;
        return *at == '"' ? at : SlowStringEnd(at, fault, out isEscaped);
    }

    /// <summary>The first quote, backslash or control character.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static byte* FindSpecial(byte* at)
    {
        while (true)
        {
            var bytes = Vector128.Load(at);
            var special = Vector128.Equals(bytes, Vector128.Create((byte)'"'))
                | Vector128.Equals(bytes, Vector128.Create((byte)'\\'))
                | Vector128.Equals(bytes, Vector128.Min(bytes, Vector128.Create((byte)0x1F)));
            uint mask = special.ExtractMostSignificantBits();
            if (mask != 0) return at + BitOperations.TrailingZeroCount(mask);
            at += Vector128<byte>.Count;
        }
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private static byte* SlowStringEnd(byte* at, JsonFault fault, out bool isEscaped)
    {
        isEscaped = false;
        while (*at != '"')
        {
            if (*at != '\\') return fault.Stop(at, "a string without control characters, up to its closing quote,");
            isEscaped = true;
            at = Escape(at, fault);
            if (at == null) return null;
            at = FindSpecial(at);
        }
        return at;
    }

    private static byte* Escape(byte* at, JsonFault fault)
    {
        switch (at[1])
        {
            case (byte)'"' or (byte)'\\' or (byte)'/' or (byte)'b' or (byte)'f' or (byte)'n' or (byte)'r' or (byte)'t':
                return at + 2;
            case (byte)'u' when JsonEscapes.TryCodeUnit(at, out int unit):
                if ((unit & 0xF800) != 0xD800) return at + 6;
                bool isPair = unit < 0xDC00 && JsonEscapes.TryCodeUnit(at + 6, out int low) && (low & 0xFC00) == 0xDC00;
                if (isPair) return at + 12;
                fault.AddLoneSurrogate(at);
                return at + 6;
            default:
                return fault.Stop(at, "an escape of JSON");
        }
    }

    /// <summary>Reads <c>true</c>, <c>false</c> or <c>null</c>.</summary>
    public static byte* Literal(byte* at, JsonFault fault, out JsonKind kind)
    {
        uint word = Unsafe.ReadUnaligned<uint>(at);
        if (word == True)
        {
            kind = JsonKind.True;
            return at + 4;
        }
        if (word == Null)
        {
            kind = JsonKind.Null;
            return at + 4;
        }
        kind = JsonKind.False;
        if (*at == 'f' && Unsafe.ReadUnaligned<uint>(at + 1) == AlseOfFalse) return at + 5;
        return fault.Stop(at, "a JSON value");
    }
}
