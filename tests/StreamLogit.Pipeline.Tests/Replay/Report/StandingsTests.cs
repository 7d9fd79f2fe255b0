using StreamLogit.Pipeline.Replay.Comparison;
using StreamLogit.Pipeline.Replay.Report;

namespace StreamLogit.Pipeline.Tests.Replay.Report;

public sealed class StandingsTests
{
    [Theory]
    [InlineData(-0.01, -0.02, -0.001, 21, 0, 1, Standing.Better)]
    [InlineData(-0.01, -0.02, -0.001, 19, 0, 1, Standing.Unclear)]
    [InlineData(-0.01, -0.02, -0.001, 21, 0, 10, Standing.Unclear)]
    [InlineData(-0.01, -0.02, -0.001, 201, 0, 10, Standing.Better)]
    [InlineData(-0.01, -0.02, 0.001, 1e6, 0, 1, Standing.Unclear)]
    [InlineData(-0.01, double.NaN, double.NaN, 21, 0, 1, Standing.Better)]
    [InlineData(0.01, 0.001, 0.02, 0, 21, 1, Standing.Worse)]
    [InlineData(0.01, 0.001, 0.02, 1e6, 0, 1, Standing.Unclear)]
    [InlineData(0, 0, 0, 0, 0, 1, Standing.Same)]
    public void Of_DifferenceAndEvidence_TakesBothTogether(
        double difference, double low, double high, double better, double worse, int tried, Standing expected)
    {
        var none = new Difference(0, 0, 0);
        var variant = new VariantComparison(
            "v", default, new VariantDifferences(new Difference(difference, low, high), none, none), none, EvidenceOf(better), EvidenceOf(worse));

        Assert.Equal(expected, Standings.Of(variant, tried));
    }

    private static Evidence EvidenceOf(double peak) => new(0, peak == 0 ? 0 : Math.Log(peak), null);
}
