using CsCheck;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>Runs a check over generated values that are the same in every run; CsCheck's own seed fixes only the first of them.</summary>
internal static class SeededSamples
{
    public static void Check<T>(this Gen<T> generator, int count, uint seed, Action<T> check)
    {
        var random = new PCG(1, seed);
        for (int i = 0; i < count; i++)
        {
            ulong state = random.State;
            var value = generator.Generate(random, null, out _);
            try
            {
                check(value);
            }
            catch (Exception exception)
            {
                throw new InvalidOperationException($"Sample {i} of seed {seed} (state {state}) fails: {CsCheck.Check.Print(value)}", exception);
            }
        }
    }
}
