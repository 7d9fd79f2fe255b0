namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>SplitMix64 (Steele, Lea &amp; Flood 2014): the same numbers from the same seed on every machine and in every version.</summary>
internal struct SeededRandom(ulong seed)
{
    private ulong _state = seed;

    /// <summary>A whole number from 0 to <paramref name="count"/> - 1.</summary>
    public int Below(int count)
    {
        _state += 0x9E3779B97F4A7C15;
        ulong z = _state;
        z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9;
        z = (z ^ (z >> 27)) * 0x94D049BB133111EB;

        // The bias of the multiplication is below count / 2^64.
        return (int)Math.BigMul(z ^ (z >> 31), (ulong)count, out _);
    }
}
