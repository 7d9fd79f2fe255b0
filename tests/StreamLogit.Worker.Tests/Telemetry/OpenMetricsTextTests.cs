namespace StreamLogit.Worker.Tests.Telemetry;

/// <summary>The reader of the tests refuses what the format refuses, so that its silence means something.</summary>
public sealed class OpenMetricsTextTests
{
    private const string Good = """
        # TYPE a counter
        # HELP a Of \\ and \n.
        a_total{x="1",y="\"\\\n"} 3
        a_created{x="1",y="\"\\\n"} 1.5
        # TYPE b_seconds histogram
        # UNIT b_seconds seconds
        b_seconds_bucket{le="0.1"} 1
        b_seconds_bucket{le="+Inf"} 2
        b_seconds_sum 5.05
        b_seconds_count 2
        # TYPE c gauge
        c NaN
        # EOF

        """;

    [Fact]
    public void Parse_GoodText_GivesItsSamples()
    {
        var metrics = OpenMetricsText.Parse(Good);
        Assert.Equal(["counter", "histogram", "gauge"], metrics.Families.Values);
        Assert.Equal(7, metrics.Samples.Count);
        Assert.Equal(5.05, metrics.ValueOf("b_seconds_sum"));
    }

    [Theory]
    [InlineData("# EOF\n", "")] // no end
    [InlineData("a_total{", "a{")] // a counter without its suffix
    [InlineData("a_total{", "d_total{")] // of no family
    [InlineData("# TYPE a counter", "# TYPE a count")]
    [InlineData("# UNIT b_seconds seconds", "# UNIT b_seconds milliseconds")]
    [InlineData("""{x="1",y="\"\\\n"} 3""", """{x="1",x="2"} 3""")]
    [InlineData("""{x="1",y="\"\\\n"} 3""", """{x="1",y="\q"} 3""")]
    [InlineData("""{x="1",y="\"\\\n"} 3""", """{x="1",y="\"\\\n"} -3""")]
    [InlineData("""{x="1",y="\"\\\n"} 3""", """{x="1",y="\"\\\n"} three""")]
    [InlineData("le=\"0.1\"} 1", "le=\"0.1\"} 3")] // buckets that fall
    [InlineData("le=\"+Inf\"", "le=\"9\"")]
    [InlineData("b_seconds_count 2", "b_seconds_count 3")]
    [InlineData("c NaN", "c 1\nc 1")] // twice
    [InlineData("c NaN", "c 1\n# HELP c late")]
    [InlineData("c NaN", "c 1\n# TYPE a gauge")] // a family in two places
    [InlineData("c NaN", "c 1\n")] // an empty line
    public void Parse_BadText_Throws(string good, string bad) =>
        Assert.Throws<FormatException>(() => OpenMetricsText.Parse(Good.Replace(good, bad, StringComparison.Ordinal)));
}
