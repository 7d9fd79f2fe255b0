using CsCheck;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>
/// Runs a check on samples that are the same every time. The library's own runner takes only the first sample from a seed it is given, and
/// all others from the clock.
/// </summary>
internal static class FixedSeed
{
    public static void Check<T>(this Gen<T> samples, int count, ulong seed, Action<T> check)
    {
        var random = new PCG(1, seed);
        for (int i = 0; i < count; i++) check(samples.Generate(random, null, out _));
    }
}
