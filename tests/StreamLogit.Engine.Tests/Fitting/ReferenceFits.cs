using System.Text.Json;
using StreamLogit.Engine.Fitting;

namespace StreamLogit.Engine.Tests.Fitting;

/// <summary>The fits of R 4.2.2 (glm) in tests/data/reference.json, and the rows they were made of.</summary>
internal static class ReferenceFits
{
    public static JsonElement Of(string name) => TestData.Reference.GetProperty("R").GetProperty(name).GetProperty("glm");

    public static DenseRows Rows(string name)
    {
        switch (name)
        {
            case "oring_binary":
                return Rows(TestData.Columns("oring_launch_order.csv", "fail", "temp"), "temp");
            case "oring_binomial6":
                return Binomial(TestData.Columns("oring_launch_order.csv", "nfail", "temp"), "temp");
            case "oring_binomial6_tp":
                // R was given these two pressures; the published table, and so the file, has 100 and 200 psi.
                var launches = TestData.Columns("oring_launch_order.csv", "nfail", "temp", "pressure");
                (launches[6][2], launches[8][2]) = (50, 100);
                return Binomial(launches, "temp", "pressure");
            case "birdstrikes_first5000":
                string[] strikes = ["large", "medium", "climb", "descent", "approach", "takeoff", "night"];
                return Rows(TestData.Columns("birdstrikes_xy.csv", ["y", .. strikes]).Take(5000), strikes);
            case "seattle_first1095":
                string[] weather = ["precip", "tmax", "tmin", "wind", "rain_today"];
                return Rows(TestData.Columns("seattle_xy.csv", ["y", .. weather]).Take(1095), weather);
            default:
                throw new ArgumentOutOfRangeException(nameof(name));
        }
    }

    // Label first, then the columns.
    public static DenseRows Rows(IEnumerable<double[]> table, params string[] columns)
    {
        var rows = new DenseRows([.. columns]);
        foreach (double[] row in table) rows.Add(row.AsSpan(1), row[0]);
        return rows;
    }

    // Six O-rings a launch: the label is the share of damaged ones, the weight is 6.
    public static DenseRows Binomial(IEnumerable<double[]> table, params string[] columns)
    {
        var rows = new DenseRows([.. columns]);
        foreach (double[] row in table) rows.Add(row.AsSpan(1), row[0] / 6, 6);
        return rows;
    }
}
