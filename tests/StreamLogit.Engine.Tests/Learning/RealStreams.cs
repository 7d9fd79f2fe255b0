namespace StreamLogit.Engine.Tests.Learning;

/// <summary>The three real streams, with the columns that the reference traces use.</summary>
internal static class RealStreams
{
    public static readonly string[] Names = ["oring", "seattle", "birdstrikes"];

    public static LabelledRow[] Read(string name) => name switch
    {
        "oring" => Rows(TestData.Columns("oring_launch_order.csv", "fail", "temp"), v => [(v[1] - 70) / 10]),
        "seattle" => Rows(
            TestData.Columns("seattle_xy.csv", "y", "precip", "tmax", "tmin", "wind", "rain_today"),
            v => [v[1] / 10, (v[2] - 16) / 7, (v[3] - 8) / 5, (v[4] - 3) / 1.5, v[5]]),
        "birdstrikes" => Rows(
            TestData.Columns("birdstrikes_xy.csv", "y", "large", "medium", "climb", "descent", "approach", "takeoff", "night"),
            v => v[1..]),
        _ => throw new ArgumentOutOfRangeException(nameof(name)),
    };

    private static LabelledRow[] Rows(List<double[]> table, Func<double[], double[]> values) =>
        [.. table.Select(row => new LabelledRow(values(row), (int)row[0]))];
}
