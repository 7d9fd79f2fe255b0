using System.Collections.Immutable;

namespace StreamLogit.Worker.Web.Views;

/// <summary>How far back curves go.</summary>
/// <param name="Name">As it stands in links.</param>
/// <param name="Text">As it stands on the page.</param>
/// <param name="Minutes">The length.</param>
/// <param name="StepMinutes">The length of time that a point of a curve stands for.</param>
internal sealed record PastSpan(string Name, string Text, long Minutes, long StepMinutes)
{
    private const long Hour = 60, Day = 24 * Hour;

    /// <summary>The spans that can be chosen, the shortest first; each has 48 to 73 points.</summary>
    public static ImmutableArray<PastSpan> All { get; } =
    [
        new("6h", "6 hours", 6 * Hour, 5),
        new("2d", "2 days", 2 * Day, Hour),
        new("14d", "2 weeks", 14 * Day, 6 * Hour),
        new("60d", "60 days", 60 * Day, Day),
        new("2y", "2 years", 730 * Day, 10 * Day),
    ];
}
