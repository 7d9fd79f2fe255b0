namespace StreamLogit.Engine.Tests.Health.Detection;

/// <summary>Random numbers from a fixed seed (SplitMix64), the same on every machine.</summary>
internal sealed class FixedStream(ulong seed)
{
    // Scrambled, because streams from neighbouring states would be the same stream shifted.
    private ulong _state = Scrambled(seed);
    private double _spare = double.NaN;

    /// <summary>Uniform over 0 to below 1.</summary>
    public double Uniform()
    {
        _state += 0x9E3779B97F4A7C15;
        return (Scrambled(_state) >> 11) * (1.0 / (1UL << 53));
    }

    /// <summary>Standard normal (Box &amp; Muller).</summary>
    public double Normal()
    {
        if (!double.IsNaN(_spare))
        {
            double kept = _spare;
            _spare = double.NaN;
            return kept;
        }
        double radius = Math.Sqrt(-2 * Math.Log(1 - Uniform())), angle = 2 * Math.PI * Uniform();
        _spare = radius * Math.Sin(angle);
        return radius * Math.Cos(angle);
    }

    /// <summary>1 with probability p, else 0.</summary>
    public int Label(double p) => Uniform() < p ? 1 : 0;

    private static ulong Scrambled(ulong z)
    {
        z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9;
        z = (z ^ (z >> 27)) * 0x94D049BB133111EB;
        return z ^ (z >> 31);
    }
}
