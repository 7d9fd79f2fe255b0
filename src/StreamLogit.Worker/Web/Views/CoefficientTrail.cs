using System.Collections.Immutable;
using StreamLogit.Engine;

namespace StreamLogit.Worker.Web.Views;

/// <summary>
/// The largest coefficients at moments of the past, since this worker started. Immutable. When there are too many moments, every second one is left out and the next ones are
/// taken at twice the distance, so that the trail always reaches back to the start.
/// </summary>
/// <param name="Moments">The moments, the oldest first; the last is the present.</param>
internal sealed record CoefficientTrail(ImmutableArray<LargestCoefficients> Moments)
{
    private const int MostMoments = 120;
    private const long ShortestStepMicroseconds = 60_000_000;

    private long StepMicroseconds { get; init; } = ShortestStepMicroseconds;

    /// <summary>Without any moment.</summary>
    public static CoefficientTrail Empty { get; } = new([]);

    /// <summary>The coefficients of now, or null before any were found.</summary>
    public LargestCoefficients? Present => Moments.IsEmpty ? null : Moments[^1];

    /// <summary>The trail with what was found last; itself where that is nothing new.</summary>
    public CoefficientTrail With(LargestCoefficients? found)
    {
        if (found is null || ReferenceEquals(found, Present)) return this;
        // The present one stays only if it is far enough from the one before it.
        bool isPresentKept = Moments.Length < 2 || Clock(Moments[^1]) - Clock(Moments[^2]) >= StepMicroseconds;
        var moments = (isPresentKept ? Moments : Moments.RemoveAt(Moments.Length - 1)).Add(found);
        if (moments.Length <= MostMoments) return this with { Moments = moments };
        return this with { Moments = [.. moments.Where((_, index) => index % 2 == 0 || index == moments.Length - 1)], StepMicroseconds = 2 * StepMicroseconds };
    }

    /// <summary>The last moment at or before a time of the stream's clock, or else the first; null where there is none but the present.</summary>
    public LargestCoefficients? Before(long clockMicroseconds) =>
        Moments.Length < 2 ? null : Moments[..^1].LastOrDefault(moment => Clock(moment) <= clockMicroseconds) ?? Moments[0];

    private static long Clock(LargestCoefficients moment) => moment.ClockMicroseconds ?? 0;
}
