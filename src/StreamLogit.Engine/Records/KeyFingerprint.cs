using System.Runtime.CompilerServices;

namespace StreamLogit.Engine.Records;

/// <summary>A quick hash of the name of a key. Names that are equal have equal fingerprints; equal fingerprints say nothing for sure.</summary>
internal static class KeyFingerprint
{
    /// <summary>Mixes the length with the first and the last eight bytes.</summary>
    public static ulong Of(ReadOnlySpan<byte> name)
    {
        ulong head, tail;
        int length = name.Length;
        if (length >= 8)
        {
            head = Unsafe.ReadUnaligned<ulong>(in name[0]);
            tail = Unsafe.ReadUnaligned<ulong>(in name[length - 8]);
        }
        else if (length >= 4)
        {
            head = Unsafe.ReadUnaligned<uint>(in name[0]);
            tail = Unsafe.ReadUnaligned<uint>(in name[length - 4]);
        }
        else
        {
            head = length == 0 ? 0u : (uint)(name[0] | name[length / 2] << 8);
            tail = length == 0 ? 0u : name[length - 1];
        }
        // Odd constants from the digits of the golden ratio and of the square root of 3.
        ulong mixed = (head ^ (ulong)length) * 0x9E3779B97F4A7C15 ^ (tail + 0xBB67AE8584CAA73B) * 0xBB67AE8584CAA73B;
        return mixed ^ mixed >> 32;
    }
}
