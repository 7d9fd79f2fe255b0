using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Health;

/// <summary>
/// Bins of label delays: each octave of microseconds, from 1 to 2^48 (nine years), in four of equal width, so that a bin is at most a quarter of its lower end wide.
/// </summary>
internal static class DelayBins
{
    public const int Count = Octaves * PerOctave;
    private const int Octaves = 48;
    private const int PerOctave = 4;

    /// <summary>The bin of a delay of at least a microsecond.</summary>
    public static int Of(long microseconds)
    {
        // Exponent and two further bits of the mantissa, as they stand in the double.
        long bits = BitConverter.DoubleToInt64Bits(microseconds) >> 50;
        return (int)Math.Min(bits - (1023L << 2), Count - 1);
    }

    /// <summary>Where a bin starts and ends, in seconds.</summary>
    public static Interval SecondsOf(int bin)
    {
        double octave = 1L << (bin / PerOctave), low = octave * (1 + bin % PerOctave * 0.25);
        return new Interval(low / 1e6, (low + octave * 0.25) / 1e6);
    }
}
