using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Metrics;
using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Tests.Web.Views;

public sealed class VerdictTests
{
    private const string Week = "in the last 7 days";

    [Fact]
    public void Of_AlertsWithinTheirRange_SaysThatProbabilitiesHold()
    {
        var verdict = Verdict.Of(Figures(10_000, Promised(150, 140, 151), alerts: 1204, Promised(96.3, 55, 101)), Week, awaiting: 0);

        Assert.Equal((Standing.Holds, "Probabilities hold", null), (verdict.Standing, verdict.Title, verdict.Note));
        Assert.Equal("of 1,204 alerts in the last 7 days promised 96.3 bad, 101 came (80 % range 87 to 105).", verdict.Sentence);
    }

    [Theory]
    [InlineData(100, nameof(Standing.Holds), "Probabilities hold")]
    [InlineData(112, nameof(Standing.Holds), "Probabilities hold")]
    [InlineData(115, nameof(Standing.Doubtful), "Probabilities may be off")]
    [InlineData(119, nameof(Standing.Doubtful), "Probabilities may be off")]
    [InlineData(120, nameof(Standing.Broken), "Probabilities promise too little")]
    [InlineData(80, nameof(Standing.Broken), "Probabilities promise too much")]
    public void Of_LabelsAlone_StandsByTheRanges(double came, string standing, string title)
    {
        // 100 promised with a standard deviation of 10: 80 % within 87.2 to 112.8, 95 % within 80.4 to 119.6 (R 4.2.2, qnorm).
        var verdict = Verdict.Of(Figures(9000, Promised(100, 100, came)), Week, awaiting: 0);

        Assert.Equal((standing, title), (verdict.Standing.ToString(), verdict.Title));
        Assert.StartsWith("of 9,000 labels in the last 7 days promised 100 bad, ", verdict.Sentence, StringComparison.Ordinal);
        Assert.Equal(standing == nameof(Standing.Holds), verdict.Note is null);
    }

    [Fact]
    public void Of_AlertsThatHoldAmongLabelsThatDoNot_SpeaksOfAllLabels()
    {
        var verdict = Verdict.Of(Figures(10_000, Promised(150, 140, 230), alerts: 1204, Promised(96.3, 55, 101)), Week, awaiting: 0);

        Assert.Equal(Standing.Broken, verdict.Standing);
        Assert.StartsWith("of 10,000 labels", verdict.Sentence, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(2, 1.9, 4, nameof(Standing.Unknown))]
    [InlineData(2, 1.9, 11, nameof(Standing.Unknown))]
    [InlineData(2, 1.9, 12, nameof(Standing.Broken))]
    public void Of_FewPromised_SpeaksOnlyOfWhatFarExceedsThem(double expected, double variance, double came, string standing) =>
        Assert.Equal(standing, Verdict.Of(Figures(300, Promised(expected, variance, came)), Week, awaiting: 0).Standing.ToString());

    [Fact]
    public void Of_NoLabels_SaysHowManyWait()
    {
        var verdict = Verdict.Of(Figures(0, Promised(0, 0, 0)), Week, awaiting: 1030);

        Assert.Equal((Standing.Unknown, "Nothing to tell yet"), (verdict.Standing, verdict.Title));
        Assert.Equal("no label came in the last 7 days. 1,030 events wait for theirs.", verdict.Sentence);
    }

    [Fact]
    public void Of_LogLossSurelyAboveTheBaseRate_SaysThatScoresDoHarm()
    {
        var figures = Figures(10_000, Promised(100, 100, 100)) with { LogLoss = 0.08, LogLossStandardError = 0.001, BaseRateLogLoss = 0.056 };

        var verdict = Verdict.Of(figures, Week, awaiting: 0);

        Assert.Equal((Standing.Broken, "The scores do harm"), (verdict.Standing, verdict.Title));
        Assert.Equal("of 10,000 labels in the last 7 days their log-loss is 0.08, that of the mere base rate 0.056.", verdict.Sentence);
    }

    [Fact]
    public void Of_AQuietWindowWithNoBadOutcome_IsNotCalledHarm()
    {
        // All labels 0 and p = 0.011 against 0.01: surely a higher loss, by what is no fault of the scores.
        var figures = Figures(600, Promised(6.6, 6.5, 4)) with { LogLoss = 0.0111, LogLossStandardError = 0, BaseRateLogLoss = 0.0101 };

        Assert.Equal(Standing.Doubtful, Verdict.Of(figures with { Promised = Promised(6.6, 6.5, 3) }, Week, awaiting: 0).Standing);
        Assert.Equal(Standing.Holds, Verdict.Of(figures, Week, awaiting: 0).Standing);
    }

    private static PromisedPositives Promised(double expected, double variance, double came) => new(expected, variance, came);

    private static HealthFigures Figures(long count, PromisedPositives all, long alerts = 0, PromisedPositives ofAlerts = default) =>
        new(count, count, 0.03, 0.056, 0.01, all.Expected / count, all.Came / count)
        {
            LogLossStandardError = 0.001,
            Promised = all,
            Alerts = new AlertFigures(alerts, alerts, ofAlerts, double.NaN, Interval.None, double.NaN, Interval.None, double.NaN),
        };
}
