using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Features.Histories;

/// <summary>Exponential decay by half-lives.</summary>
internal static class Decay
{
    private const double Ln2 = 0.69314718055994531;

    /// <summary>2^-(time / half-life), both in the same unit.</summary>
    public static double Over(double time, double halfLife) =>
        time == 0 ? 1 : Elementary.Exp(-Ln2 * (time / halfLife)); // an event whose label it brings, often
}
