using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features;

/// <summary>
/// How a category value finds its slot, the same on every machine. With h0 = XXH3-64(UTF-8 of the feature's name) xor the definition's seed,
/// and v1, v2, ... = XXH3-64 of the UTF-8 text of each crossed field (a fixed number where it is missing):
/// h(i) = mix(h(i-1) xor v(i)), where mix is the finaliser of SplitMix64 (Steele, Lea &amp; Flood 2014).
/// The slot is the low bits of the last h.
/// </summary>
internal sealed class HashedSlots(int slots, ulong seed)
{
    /// <summary>Stands for the hash of a missing value, which so is a value of its own.</summary>
    public const ulong MissingValue = 0x9E3779B97F4A7C15;

    public ulong SeedOf(string featureName) => FieldHash.Of(Encoding.UTF8.GetBytes(featureName)) ^ seed;

    public int SlotOf(ulong hash) => (int)(hash & (ulong)(slots - 1));

    /// <summary>The high half of the hash, of which the slot has nothing; never 0.</summary>
    public static uint TagOf(ulong hash) => (uint)(hash >> 32) | 1;

    public static ulong Combine(ulong hash, ulong value)
    {
        ulong z = hash ^ value;
        z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9;
        z = (z ^ (z >> 27)) * 0x94D049BB133111EB;
        return z ^ (z >> 31);
    }
}
