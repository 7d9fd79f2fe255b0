using StreamLogit.Engine.Fitting;

namespace StreamLogit.Engine.Tests.Fitting;

public sealed class SeparationTests
{
    private const string NoEstimates =
        "No finite coefficients have the largest likelihood. Leave the column out, merge it with another or fit with a penalty.";

    [Fact]
    public void Fit_OneColumnSeparates_SaysWhere()
    {
        // The O-rings without the four launches that overlap: damage at every temperature below 65 and at none above.
        var fit = MaximumLikelihood.Fit(ReferenceFits.Rows(
            TestData.Columns("oring_launch_order.csv", "fail", "temp").Where(r => r[0] == 1 == r[1] < 65), "temp"));
        Assert.Equal(FitOutcome.PerfectSeparation, fit.Outcome);
        Assert.Equal(
            [$"'temp' separates the labels perfectly: every row with 'temp' up to 63 has label 1, every row from 66 on has label 0. {NoEstimates}"],
            fit.Findings);
        Assert.Empty(fit.Coefficients);
        Assert.InRange(fit.Steps, 1, 5);
    }

    [Theory]
    [InlineData(0, "above", 0)]
    [InlineData(1, "above", 0)]
    [InlineData(1, "below", 1)]
    public void Fit_ARareFlagWithOneLabelOnly_SaysWhichRows(int label, string side, int usual)
    {
        var random = new Random(1);
        var rows = new DenseRows(["amount", "flag"]);
        for (int i = 0; i < 20_000; i++)
        {
            bool isRare = i % 2000 == 7;
            double amount = random.NextDouble();
            rows.Add([amount, isRare ? 1 - usual : usual], isRare ? label : random.NextDouble() < 0.1 + 0.3 * amount ? 1 : 0);
        }
        var fit = MaximumLikelihood.Fit(rows);
        Assert.Equal(FitOutcome.QuasiSeparation, fit.Outcome);
        Assert.Equal([$"Every row with 'flag' {side} {usual} has label {label}. {NoEstimates}"], fit.Findings);
    }

    [Fact]
    public void Fit_SumOfColumnsSeparates_NamesThem()
    {
        var random = new Random(2);
        var rows = new DenseRows(["a", "b", "c"]);
        for (int i = 0; i < 400; i++)
        {
            double a = random.NextDouble() * 100, b = random.NextDouble(), c = random.NextDouble();
            rows.Add([a, b, c], a / 100 + b > 1 ? 1 : 0);
        }
        var fit = MaximumLikelihood.Fit(rows);
        Assert.Equal(FitOutcome.PerfectSeparation, fit.Outcome);
        Assert.StartsWith("A combination of 'a', 'b'", Assert.Single(fit.Findings), StringComparison.Ordinal);
    }

    [Fact]
    public void Fit_TwoFlagsTogetherHaveOneLabelOnly_IsQuasiSeparation()
    {
        var random = new Random(3);
        var rows = new DenseRows(["x", "first", "second", "both"]);
        for (int i = 0; i < 3000; i++)
        {
            int first = random.Next(2), second = random.Next(5) == 0 ? 1 : 0;
            double x = random.NextDouble();
            int label = first * second == 1 ? 0 : random.NextDouble() < x ? 1 : 0;
            rows.Add([x, first, second, first * second], label);
        }
        var fit = MaximumLikelihood.Fit(rows);
        Assert.Equal(FitOutcome.QuasiSeparation, fit.Outcome);
        Assert.StartsWith("Every row with 'both' above 0 has label 0.", Assert.Single(fit.Findings), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(1e-3)]
    [InlineData(1e-4)]
    public void Fit_LabelsOverlapByLittle_Converges(double overlap)
    {
        // One row with label 0 lies above one with label 1; everything else is separated.
        var rows = new DenseRows(["x"]);
        for (int i = 1; i <= 50; i++)
        {
            rows.Add([-i], 0);
            rows.Add([i], 1);
        }
        rows.Add([overlap], 0);
        rows.Add([-overlap], 1);
        var fit = MaximumLikelihood.Fit(rows);
        Assert.Equal(FitOutcome.Converged, fit.Outcome);
        Assert.True(fit["x"].Estimate > 5);
    }

    [Fact]
    public void Fit_OneValueFarAway_IsNotTakenForSeparation()
    {
        var random = new Random(4);
        var rows = new DenseRows(["amount"]);
        for (int i = 0; i < 10_000; i++) rows.Add([random.NextDouble() * 10], random.Next(2));
        rows.Add([1e9], 1);
        var fit = MaximumLikelihood.Fit(rows);
        Assert.Equal(FitOutcome.Converged, fit.Outcome);
    }

    [Fact]
    public void Fit_RandomSmallTables_AgreesWithTheExactAnswerForOneColumn()
    {
        // For one column and an intercept separation means that the two labels' ranges do not overlap by more than a point.
        var random = new Random(6);
        var seen = new HashSet<FitOutcome>();
        for (int round = 0; round < 2000; round++)
        {
            int count = random.Next(4, 12);
            var table = Enumerable.Range(0, count).Select(_ => new double[] { random.Next(2), random.Next(6) }).ToArray();
            if (table.All(r => r[0] == table[0][0]) || table.All(r => r[1] == table[0][1])) continue;
            double[] ones = [.. table.Where(r => r[0] == 1).Select(r => r[1])], zeros = [.. table.Where(r => r[0] == 0).Select(r => r[1])];
            var expected =
                zeros.Max() < ones.Min() || ones.Max() < zeros.Min() ? FitOutcome.PerfectSeparation
                : zeros.Max() == ones.Min() || ones.Max() == zeros.Min() ? FitOutcome.QuasiSeparation
                : FitOutcome.Converged;
            Assert.Equal(expected, MaximumLikelihood.Fit(ReferenceFits.Rows(table, "x")).Outcome);
            seen.Add(expected);
        }
        Assert.Equal(3, seen.Count);
    }

    [Fact]
    public void Fit_RandomTablesOfTwoColumns_AgreesWithExactEnumeration()
    {
        var random = new Random(7);
        var seen = new HashSet<FitOutcome>();
        for (int round = 0; round < 3000; round++)
        {
            int count = random.Next(6, 16);
            var table = Enumerable.Range(0, count).Select(_ => new double[] { random.Next(2), random.Next(3), random.Next(4) }).ToArray();
            if (ExactSeparation(table) is not { } expected) continue;
            Assert.Equal(expected, MaximumLikelihood.Fit(ReferenceFits.Rows(table, "x", "y")).Outcome);
            seen.Add(expected);
        }
        Assert.Equal(3, seen.Count);
    }

    [Fact]
    public void Fit_LabelsAllTheSame_SaysSo()
    {
        var rows = new DenseRows(["x"]);
        rows.Add([1], 0);
        rows.Add([2], 0);
        rows.Add([3], 1, weight: 0);
        var fit = MaximumLikelihood.Fit(rows);
        Assert.Equal(FitOutcome.OneClass, fit.Outcome);
        Assert.Equal(["All 2 rows have label 0: there is nothing to tell apart."], fit.Findings);
        Assert.Equal(["There are no rows to fit."], MaximumLikelihood.Fit(new DenseRows(["x"])).Findings);
    }

    [Fact]
    public void Add_UnusableValues_Throws()
    {
        var rows = new DenseRows(["x"]);
        Assert.Throws<ArgumentException>(() => rows.Add([double.NaN], 1));
        Assert.Throws<ArgumentException>(() => rows.Add([1, 2], 1));
        Assert.Throws<ArgumentException>(() => rows.Add([1], 1.5));
        Assert.Throws<ArgumentException>(() => rows.Add([1], 1, -1));
    }

    // The separating directions form a cone without a line in it when the rows span all three dimensions. Its edges are then normal to two rows,
    // and small integers make every product exact. The sum of the edges lies inside.
    private static FitOutcome? ExactSeparation(double[][] table)
    {
        int[][] rows = [.. table.Select(r => r[0] == 1 ? new[] { 1, (int)r[1], (int)r[2] } : [-1, -(int)r[1], -(int)r[2]])];
        if (table.All(r => r[0] == table[0][0])) return null;
        bool spans = false;
        var inside = new int[3];
        foreach (int[] a in rows)
            foreach (int[] b in rows)
            {
                int[] normal = [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
                spans |= rows.Any(r => Dot(r, normal) != 0);
                if (normal.Any(v => v != 0) && rows.All(r => Dot(r, normal) >= 0)) inside = [.. inside.Zip(normal, (x, y) => x + y)];
            }
        if (!spans) return null;
        if (rows.All(r => Dot(r, inside) == 0)) return FitOutcome.Converged;
        return rows.All(r => Dot(r, inside) > 0) ? FitOutcome.PerfectSeparation : FitOutcome.QuasiSeparation;
    }

    private static int Dot(int[] a, int[] b) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}
