using StreamLogit.Engine.Fitting;

namespace StreamLogit.Engine.Tests.Fitting;

public sealed class MaximumLikelihoodTests
{
    [Theory]
    [InlineData("oring_binary")]
    [InlineData("oring_binomial6")]
    [InlineData("oring_binomial6_tp")]
    [InlineData("birdstrikes_first5000")]
    [InlineData("seattle_first1095")]
    public void Fit_RealData_AgreesWithRGlm(string name)
    {
        var fit = MaximumLikelihood.Fit(ReferenceFits.Rows(name));
        var r = ReferenceFits.Of(name);
        Assert.Equal(FitOutcome.Converged, fit.Outcome);
        Assert.Empty(fit.Findings);
        var named = r.GetProperty("coef").EnumerateObject().ToArray();
        Assert.Equal(named.Length, fit.Coefficients.Length);
        for (int i = 0; i < named.Length; i++)
        {
            var ours = fit.Coefficients[i];
            Assert.Equal(named[i].Name, i == 0 ? "(Intercept)" : ours.Name);
            AssertRelative(named[i].Value.GetDouble(), ours.Estimate, 1e-7);

            // R computes its standard errors at the coefficients of the step before the last.
            AssertRelative(r.GetProperty("se").GetProperty(named[i].Name).GetDouble(), ours.StandardError, 1e-6);
            AssertRelative(r.GetProperty("z").GetProperty(named[i].Name).GetDouble(), ours.Z, 1e-6);
        }
        AssertRelative(r.GetProperty("deviance").GetDouble(), fit.Deviance, 1e-10);
        AssertRelative(r.GetProperty("null_deviance").GetDouble(), fit.NullDeviance, 1e-10);
        Assert.Equal(r.GetProperty("n").GetInt32(), fit.Rows);
    }

    [Fact]
    public void Fit_ORings_AgreesWithThePublishedFit()
    {
        // Dalal, Fowlkes & Hoadley, JASA 84 (1989) 945, section 3: binomial fit 5.085 - 0.1156 t, deviance 18.086,
        // with the pressure 2.520 - 0.0983 t + 0.00848 s, deviance 16.546; binary fit 15.043 - 0.2322 t, deviance 20.315.
        var binomial = MaximumLikelihood.Fit(ReferenceFits.Rows("oring_binomial6"));
        Assert.Equal(5.085, binomial["intercept"].Estimate, 5e-4);
        Assert.Equal(-0.1156, binomial["temp"].Estimate, 5e-5);
        Assert.Equal(18.086, binomial.Deviance, 5e-4);
        var pressure = MaximumLikelihood.Fit(ReferenceFits.Binomial(
            TestData.Columns("oring_launch_order.csv", "nfail", "temp", "pressure"), "temp", "pressure"));
        Assert.Equal(2.520, pressure["intercept"].Estimate, 5e-4);
        Assert.Equal(-0.0983, pressure["temp"].Estimate, 5e-5);
        Assert.Equal(0.00848, pressure["pressure"].Estimate, 5e-6);
        Assert.Equal(16.546, pressure.Deviance, 5e-4);
        var binary = MaximumLikelihood.Fit(ReferenceFits.Rows("oring_binary"));
        Assert.Equal(15.043, binary["intercept"].Estimate, 5e-4);
        Assert.Equal(-0.2322, binary["temp"].Estimate, 5e-5);
        Assert.Equal(20.315, binary.Deviance, 5e-4);

        // 2 * norm.sf(2.14495754927373) of SciPy, the z of R.
        Assert.Equal(0.03195624124932753, binary["temp"].P, 1e-8);
    }

    [Fact]
    public void Fit_BinomialRowsSplitIntoTrials_HasTheSameCoefficients()
    {
        var whole = new DenseRows(["temp"]);
        var split = new DenseRows(["temp"]);
        foreach (double[] row in TestData.Columns("oring_launch_order.csv", "nfail", "temp"))
        {
            whole.Add([row[1]], row[0] / 6, 6);
            split.Add([row[1]], 1, row[0]);
            for (int i = (int)row[0]; i < 6; i++) split.Add([row[1]], 0);
        }
        var (a, b) = (MaximumLikelihood.Fit(whole), MaximumLikelihood.Fit(split));
        for (int i = 0; i < a.Coefficients.Length; i++)
        {
            AssertRelative(a.Coefficients[i].Estimate, b.Coefficients[i].Estimate, 1e-10);
            AssertRelative(a.Coefficients[i].StandardError, b.Coefficients[i].StandardError, 1e-10);
        }

        // What the columns explain is the same; what is left differs by the deviance within the launches.
        Assert.Equal(a.NullDeviance - a.Deviance, b.NullDeviance - b.Deviance, 1e-9);
        Assert.Equal(a.Weight, b.Weight);
    }

    [Fact]
    public void Fit_RowsOfAnyKind_MakesResidualsOrthogonalToEveryColumn()
    {
        // The score equations, which hold at the maximum and nowhere else.
        for (int seed = 0; seed < 100; seed++)
        {
            var random = new Random(seed);
            int count = random.Next(20, 300), columns = random.Next(1, 7);
            var table = new List<double[]>();
            var rows = new DenseRows([.. Enumerable.Range(0, columns).Select(j => $"x{j}")]);
            for (int i = 0; i < count; i++)
            {
                double[] x = [.. Enumerable.Range(0, columns).Select(j => Math.Pow(10, j - 2) * (random.NextDouble() * 2 - 0.3) + j)];
                double label = random.Next(4) == 0 ? random.NextDouble() : random.Next(2), weight = 0.1 + random.NextDouble();
                table.Add([label, weight, 1, .. x]);
                rows.Add(x, label, weight);
            }
            var fit = MaximumLikelihood.Fit(rows);
            Assert.Equal(FitOutcome.Converged, fit.Outcome);
            for (int j = 0; j <= columns; j++)
            {
                double score = 0, size = 0;
                foreach (double[] row in table)
                {
                    double logOdds = fit.Coefficients.Select((c, k) => c.Estimate * row[2 + k]).Sum();
                    double term = row[1] * (row[0] - 1 / (1 + Math.Exp(-logOdds))) * row[2 + j];
                    (score, size) = (score + term, size + Math.Abs(term));
                }
                Assert.InRange(Math.Abs(score), 0, 1e-9 * size);
            }
        }
    }

    [Fact]
    public void Fit_ColumnsFarFromZero_KeepsItsPrecision()
    {
        // The O-rings with the temperature counted from 1.7e9 degrees away, the size of a Unix time.
        const double Far = 1.7e9;
        var near = MaximumLikelihood.Fit(ReferenceFits.Rows("oring_binary"));
        var far = MaximumLikelihood.Fit(ReferenceFits.Rows(
            TestData.Columns("oring_launch_order.csv", "fail", "temp").Select(r => new[] { r[0], r[1] + Far }), "temp"));
        AssertRelative(near["temp"].Estimate, far["temp"].Estimate, 1e-7);
        AssertRelative(near["temp"].StandardError, far["temp"].StandardError, 1e-7);
        Assert.Equal(near.Deviance, far.Deviance, 1e-7);
    }

    [Fact]
    public void Fit_TwiceTheSameRows_GivesTheSameBits()
    {
        var (a, b) = (MaximumLikelihood.Fit(ReferenceFits.Rows("seattle_first1095")), MaximumLikelihood.Fit(ReferenceFits.Rows("seattle_first1095")));
        Assert.Equal(a.Coefficients, b.Coefficients);
        Assert.Equal(a.Deviance, b.Deviance);
    }

    [Fact]
    public void Fit_DeterminedColumns_LeavesThemOutAndSaysWhy()
    {
        var rows = new DenseRows(["temp", "celsius", "one", "pressure", "sum"]);
        var plain = new DenseRows(["temp", "pressure"]);
        foreach (double[] row in TestData.Columns("oring_launch_order.csv", "fail", "temp", "pressure"))
        {
            rows.Add([row[1], (row[1] - 32) / 1.8, 1, row[2], 2 * row[1] - row[2]], row[0]);
            plain.Add([row[1], row[2]], row[0]);
        }
        var (fit, expected) = (MaximumLikelihood.Fit(rows), MaximumLikelihood.Fit(plain));
        Assert.Equal(FitOutcome.Converged, fit.Outcome);
        Assert.Equal(
        [
            "'one' has the same value, 1, in every row and gets no coefficient.",
            "'celsius' is determined by other columns (it is 0.555556 'temp' - 17.7778 in every row) and gets no coefficient.",
            "'sum' is determined by other columns (it is 2 'temp' - 'pressure' in every row) and gets no coefficient.",
        ], fit.Findings);
        Assert.Equal([false, false, true, true, false, true], fit.Coefficients.Select(c => double.IsNaN(c.Estimate)));
        AssertRelative(expected["temp"].Estimate, fit["temp"].Estimate, 1e-10);
        AssertRelative(expected["pressure"].StandardError, fit["pressure"].StandardError, 1e-10);
        Assert.Equal(expected.ResidualDegreesOfFreedom, fit.ResidualDegreesOfFreedom);
    }

    [Fact]
    public void Fit_EveryLevelOfACategory_LeavesTheLastOneOut()
    {
        var random = new Random(5);
        var rows = new DenseRows(["a", "b", "c"]);
        for (int i = 0; i < 5000; i++)
        {
            int level = random.Next(3);
            rows.Add([level == 0 ? 1 : 0, level == 1 ? 1 : 0, level == 2 ? 1 : 0], random.NextDouble() < 0.2 + 0.1 * level ? 1 : 0);
        }
        var fit = MaximumLikelihood.Fit(rows);
        Assert.Equal(["'c' is determined by other columns (it is - 'a' - 'b' + 1 in every row) and gets no coefficient."], fit.Findings);
        Assert.Equal(FitOutcome.Converged, fit.Outcome);
    }

    private static void AssertRelative(double expected, double actual, double tolerance) =>
        Assert.InRange(Math.Abs(actual - expected), 0, tolerance * Math.Abs(expected));
}
