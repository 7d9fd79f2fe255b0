using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Tests.Web.Views;

public sealed class CurvesTests
{
    private const long Minute = 60_000_000, Hour = 60 * Minute, Day = 24 * Hour;
    private static readonly HealthHistoryOptions Kept = new();

    [Fact]
    public void Of_SixHours_SumsMinutesToFiveEach()
    {
        var history = HealthHistory.Empty with { Minutes = [.. Enumerable.Range(0, 360).Select(minute => Point(minute * Minute, Minute, labels: 10, expected: 4, came: 5, logLoss: minute))] };

        var curve = Curves.Of(history, Kept, Past("6h"), clockMicroseconds: 360 * Minute, settings: 0);

        Assert.Equal(72, curve.Count);
        Assert.Equal((5 * Minute, 50L, 25.0), (curve[1].FromMicroseconds, curve[1].Labels, curve[1].Promised.Came));
        Assert.Equal((20.0, 10.0), (curve[1].Promised.Expected, curve[1].Promised.Variance));
        Assert.Equal(7.0, curve[1].LogLoss); // the mean of 5, 6, 7, 8, 9
    }

    [Fact]
    public void Of_StepsThatPromiseNextToNothing_AreMadeLongerButNotFewerThanTwelve()
    {
        var history = HealthHistory.Empty with { Minutes = [.. Enumerable.Range(0, 360).Select(minute => Point(minute * Minute, Minute, labels: 10, expected: 0.1, came: 0, logLoss: 1))] };

        var curve = Curves.Of(history, Kept, Past("6h"), clockMicroseconds: 360 * Minute, settings: 0);

        Assert.InRange(curve.Count, 12, 24);
        Assert.Equal(3600, curve.Sum(point => point.Labels));
    }

    [Theory]
    [InlineData("2d", Hour)]
    [InlineData("14d", Hour)]
    [InlineData("60d", Day)]
    [InlineData("2y", Day)]
    public void Of_LongerPasts_ReadHoursAndDays(string past, long unit)
    {
        const long clock = 1000 * Day;
        var hours = Enumerable.Range(0, 60 * 24).Select(hour => Point(clock - (60 * 24 - hour) * Hour, Hour, labels: 1, expected: 10, came: 1, logLoss: 1));
        var days = Enumerable.Range(0, 730).Select(day => Point(clock - (730 - day) * Day, Day, labels: 24, expected: 240, came: 24, logLoss: 1));
        var span = Past(past);

        var curve = Curves.Of(new HealthHistory([], [.. hours], [.. days]), Kept, span, clock, settings: 0);

        Assert.InRange(curve.Count, 48, 74);
        // A step may begin before the time that was asked for.
        Assert.InRange(curve.Sum(point => point.Labels), span.Minutes / 60, (span.Minutes + span.StepMinutes) / 60);
        Assert.All(curve, point => Assert.Equal(0, point.FromMicroseconds % unit));
    }

    [Fact]
    public void Of_WeightsInTheBlend_AreMeansOverTime()
    {
        var history = HealthHistory.Empty with
        {
            Minutes =
            [
                Point(0, Minute, labels: 1, expected: 9, came: 1, logLoss: 1) with { Settings = [new("a", 0, 0, 1), new("b", 0, 0, 0)] },
                Point(Minute, 3 * Minute, labels: 1, expected: 9, came: 1, logLoss: 1) with { Settings = [new("a", 0, 0, 0.2), new("b", 0, 0, 0.8)] },
            ],
        };

        var point = Assert.Single(Curves.Of(history, Kept, Past("6h"), clockMicroseconds: 4 * Minute, settings: 2));

        Assert.Equal(0.4, point.BlendWeight(0), 1e-12);
        Assert.Equal(0.6, point.BlendWeight(1), 1e-12);
    }

    private static PastSpan Past(string name) => PastSpan.All.Single(past => past.Name == name);

    private static HistoryPoint Point(long from, long length, long labels, double expected, double came, double logLoss) => new(
        from, length,
        new HealthFigures(labels, labels, logLoss, 1, 0, expected / labels, came / labels) { Promised = new(expected, expected / 2, came) },
        new StreamFigures(labels, 0, expected, 0, 0, 0, double.NaN, 0), []);
}
