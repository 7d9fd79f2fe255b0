using System.Globalization;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Fitting;

namespace StreamLogit.Engine.Tests.Fitting;

public sealed class PenalisedLikelihoodTests
{
    [Theory]
    // scikit-learn 1.2.1, LogisticRegression(C, solver="newton-cholesky", tol=1e-13) on all 1,460 days of Seattle's weather: one-hot month,
    // floor(tmax / 2) and floor(wind), with precip and tmin / 10. Intercept, January, tmax from 10, wind from 3, precip, tmin, objective.
    [InlineData(1, -1.8549273459034519, 0.6194042362396692, 0.7358824886786907, -0.11290998442094087, 0.10528025155085802, 1.2518017565054065, 801.8404921162878)]
    [InlineData(0.01, -0.49776735118575827, 0.06915180864190919, 0.136893631172124, -0.09197729323177128, 0.14124405574495422, -0.21635164060802847, 874.1529025720619)]
    public void Fit_Weather_AgreesWithScikitLearn(
        double strength, double intercept, double january, double warm, double windy, double precip, double tmin, double objective)
    {
        var fit = Weather(weighted: false).Fit(1 / strength);
        Assert.Equal(FitOutcome.Converged, fit.Outcome);
        Assert.Equal(43, fit.ColumnCount);
        Assert.Equal(intercept, fit.Intercept, 1e-9);
        Assert.Equal(january, fit.Coefficient(0), 1e-9);
        Assert.Equal(warm, fit.Coefficient(105), 1e-9);
        Assert.Equal(windy, fit.Coefficient(203), 1e-9);
        Assert.Equal(precip, fit.Coefficient(300), 1e-9);
        Assert.Equal(tmin, fit.Coefficient(301), 1e-9);
        Assert.Equal(objective, fit.Objective, 1e-9);
    }

    [Fact]
    public void Fit_WeightedWeather_AgreesWithScikitLearn()
    {
        // The same with sample_weight 1, 2, 3, 1, 2, 3 ... and C = 1.
        var fit = Weather(weighted: true).Fit();
        Assert.Equal(-2.1995521220925633, fit.Intercept, 1e-9);
        Assert.Equal(0.586288443923933, fit.Coefficient(0), 1e-9);
        Assert.Equal(0.11229531441468617, fit.Coefficient(300), 1e-9);
        Assert.Equal(1583.9797876576922, fit.Objective, 1e-9);
    }

    [Fact]
    public void Fit_NextToNoPenalty_AgreesWithTheDenseFit()
    {
        var dense = MaximumLikelihood.Fit(ReferenceFits.Rows("seattle_first1095"));
        var table = new SparseTable();
        foreach (double[] row in TestData.Columns("seattle_xy.csv", "y", "precip", "tmax", "tmin", "wind", "rain_today").Take(1095))
            table.Add([0, 1, 2, 3, 4], row[1..], (int)row[0]);
        var sparse = table.Fit(l2: 1e-10);
        Assert.Equal(dense["intercept"].Estimate, sparse.Intercept, 1e-7);
        for (int j = 0; j < 5; j++) Assert.Equal(dense.Coefficients[j + 1].Estimate, sparse.Coefficient(j), 1e-7);
        Assert.Equal(dense.Deviance, 2 * sparse.LogLoss, 1e-7);
    }

    [Fact]
    public void Fit_RandomTables_EndsWhereTheGradientIsZero()
    {
        for (int seed = 0; seed < 40; seed++)
        {
            var random = new Random(1000 + seed);
            double l2 = Math.Pow(10, random.NextDouble() * 6 - 3);
            var table = SparseTable.Random(seed, random.Next(30, 6000), random.Next(1, 5), random.Next(2, 300), withWeights: seed % 2 == 0);
            var fit = table.Fit(l2);
            Assert.Equal(FitOutcome.Converged, fit.Outcome);
            Assert.All(table.Gradient(fit, l2).Values, g => Assert.Equal(0, g, 1e-5));
        }
    }

    [Fact]
    public void Fit_FromAnEarlierFit_ReachesTheSameSooner()
    {
        var table = SparseTable.Random(3, 20_000, 3, 400);
        var columns = new SparseColumns();
        var (first, more) = (table.Rows(columns, 0, 18_000), table.Rows(columns, 18_000));
        var options = new PenaltyOptions();
        var earlier = PenalisedLikelihood.Fit([first], columns, options);
        var cold = PenalisedLikelihood.Fit([first, more], columns, options);
        var warm = PenalisedLikelihood.Fit([first, more], columns, options, earlier);
        Assert.InRange(Math.Abs(cold.Objective - warm.Objective), 0, 2 * options.ToleranceNats);
        Assert.True(warm.Passes < cold.Passes, $"{warm.Passes} against {cold.Passes} passes");
        var again = PenalisedLikelihood.Fit([first, more], columns, options, warm);
        Assert.Equal(1, again.Steps);
    }

    [Fact]
    public void Fit_WeightsOfRows_CountAsRepeatedRows()
    {
        var weighted = new SparseTable();
        var repeated = new SparseTable();
        var random = new Random(8);
        for (int i = 0; i < 3000; i++)
        {
            int[] slots = [random.Next(40), 50 + random.Next(10)];
            int label = random.Next(3) == 0 ? 1 : 0, weight = random.Next(4);
            weighted.Add(slots, [1, 1], label, weight);
            for (int k = 0; k < weight; k++) repeated.Add(slots, [1, 1], label);
        }
        var (a, b) = (weighted.Fit(), repeated.Fit());
        Assert.Equal(b.Intercept, a.Intercept, 1e-8);
        foreach (var (slot, coefficient) in b.Coefficients) Assert.Equal(coefficient, a.Coefficient(slot), 1e-8);
    }

    [Fact]
    public void Fit_ASlotTwiceInARow_CountsWithTheSumOfItsValues()
    {
        var twice = new SparseTable();
        var sum = new SparseTable();
        var random = new Random(9);
        for (int i = 0; i < 500; i++)
        {
            int slot = random.Next(5), label = random.Next(slot + 2) == 0 ? 1 : 0;
            twice.Add([slot, slot, 7], [1, 0.5, 0], label);
            sum.Add([slot], [1.5], label);
        }
        var (a, b) = (twice.Fit(), sum.Fit());
        Assert.Equal(b.Intercept, a.Intercept, 1e-8);
        for (int slot = 0; slot < 5; slot++) Assert.Equal(b.Coefficient(slot), a.Coefficient(slot), 1e-8);
        Assert.Equal(0, a.Coefficient(7));
    }

    [Fact]
    public void Fit_SeparatedLabels_HasAFiniteAnswer()
    {
        var table = new SparseTable();
        for (int i = 0; i < 1000; i++) table.Add([i % 2], [1], i % 2);
        var fit = table.Fit();
        Assert.Equal(FitOutcome.Converged, fit.Outcome);
        Assert.All(table.Gradient(fit, 1).Values, g => Assert.Equal(0, g, 1e-5));
        Assert.InRange(fit.Coefficient(1), 3, 20);
    }

    [Fact]
    public void Fit_LabelsAllTheSame_SaysSoAndKeepsTheInterceptFinite()
    {
        var table = new SparseTable();
        for (int i = 0; i < 9; i++) table.Add([i % 2], [1], 0);
        var fit = table.Fit();
        Assert.Equal(FitOutcome.OneClass, fit.Outcome);
        Assert.StartsWith("All 9 rows have label 0", Assert.Single(fit.Findings), StringComparison.Ordinal);
        Assert.Equal(Math.Log(0.5 / 9.5), fit.Intercept, 1e-12);
        Assert.Equal(["There are no rows to fit."], new SparseTable().Fit().Findings);
    }

    [Fact]
    public void Fit_TwiceTheSameRows_GivesTheSameBits()
    {
        var table = SparseTable.Random(4, 5000, 3, 50);
        var (a, b) = (table.Fit(), table.Fit());
        Assert.Equal(a.Intercept, b.Intercept);
        Assert.Equal(a.Coefficients, b.Coefficients);
    }

    [Fact]
    public void Fit_RowsTakenBack_IsThatOfTheOthers()
    {
        var columns = new SparseColumns();
        var (all, right) = (new SparseRows(columns), new SparseRows(columns));
        var random = new Random(10);
        for (int i = 0; i < 9000; i++)
        {
            int[] slots = [random.Next(40), 50 + random.Next(10), 99];
            double[] values = [1, 1, random.Next(4)];
            int label = random.Next(3) == 0 ? 1 : 0;
            double weight = random.Next(3) == 0 ? 1.0 / 3 : 1;
            bool isWrong = i % 3 == 0;
            all.Add(new EncodedVector(slots, values), isWrong ? 1 - label : label, weight);
            right.Add(new EncodedVector(slots, values), label, weight);
            if (!isWrong) continue;
            all.TakeBack(new EncodedVector(slots, values), 1 - label, (float)weight);
            all.Add(new EncodedVector(slots, values), label, weight);
        }
        all.Trim();
        Assert.Equal(right.Count, all.Count);
        var options = new PenaltyOptions { ToleranceNats = 1e-13 };
        var (a, b) = (PenalisedLikelihood.Fit([all], columns, options), PenalisedLikelihood.Fit([right], columns, options));
        Assert.Equal(b.Rows, a.Rows);
        Assert.Equal(b.Weight, a.Weight, 1e-9);
        Assert.Equal(b.Intercept, a.Intercept, 1e-8);
        foreach (var (slot, coefficient) in b.Coefficients) Assert.Equal(coefficient, a.Coefficient(slot), 1e-8);
        int[] order = [.. Enumerable.Range(0, columns.Count)];
        Assert.Equal(right.Count, all.ToDense(order, [.. order.Select(c => $"{c}")]).Count);
    }

    [Fact]
    public void StandardErrors_NextToNoPenalty_AreThoseOfTheDenseFit()
    {
        var dense = MaximumLikelihood.Fit(ReferenceFits.Rows("seattle_first1095"));
        var table = new SparseTable();
        foreach (double[] row in TestData.Columns("seattle_xy.csv", "y", "precip", "tmax", "tmin", "wind", "rain_today").Take(1095))
            table.Add([4, 3, 2, 1, 0], row[1..], (int)row[0]);
        var columns = new SparseColumns();
        var rows = table.Rows(columns);
        var options = new PenaltyOptions { L2 = 1e-10, ToleranceNats = 1e-13 };
        double[] errors = PenalisedInformation.StandardErrors([rows], PenalisedLikelihood.Fit([rows], columns, options), options);
        for (int j = 0; j < 5; j++)
        {
            Assert.True(columns.TryFind(4 - j, out int column));
            Assert.Equal(1, errors[column] / dense.Coefficients[j + 1].StandardError, 1e-6);
        }
        Assert.Equal(1, errors[5] / dense["intercept"].StandardError, 1e-6);

        // A prior that leaves the data nothing to say: its own standard deviation.
        options = new PenaltyOptions { L2 = 1e8 };
        errors = PenalisedInformation.StandardErrors([rows], PenalisedLikelihood.Fit([rows], columns, options), options);
        Assert.Equal(1e-4, errors[0], 1e-6);
    }

    [Fact]
    public void ToDense_SparseRows_FitsTheSame()
    {
        var dense = MaximumLikelihood.Fit(ReferenceFits.Rows("seattle_first1095"));
        var table = new SparseTable();
        foreach (double[] row in TestData.Columns("seattle_xy.csv", "y", "precip", "tmax", "tmin", "wind", "rain_today").Take(1095))
            table.Add([4, 3, 2, 1, 0], [row[5], row[4], row[3], row[2], row[1]], (int)row[0]);
        var columns = new SparseColumns();
        int[] order = new int[5];
        var rows = table.Rows(columns);
        for (int slot = 0; slot < 5; slot++) Assert.True(columns.TryFind(slot, out order[slot]));
        var fit = MaximumLikelihood.Fit(rows.ToDense(order, ["precip", "tmax", "tmin", "wind", "rain_today"]));
        Assert.Equal(dense.Coefficients, fit.Coefficients);
    }

    [Fact]
    public void Fit_OptionsOutOfRange_Throws()
    {
        var columns = new SparseColumns();
        Assert.Throws<ArgumentException>(() => PenalisedLikelihood.Fit([], columns, new PenaltyOptions { L2 = 0 }));
        Assert.Throws<ArgumentException>(() => PenalisedLikelihood.Fit([], columns, new PenaltyOptions { ToleranceNats = double.NaN }));
        Assert.Throws<ArgumentException>(() => PenalisedLikelihood.Fit([new SparseRows(new SparseColumns())], columns, new PenaltyOptions()));
        Assert.Throws<ArgumentException>(() => new SparseRows(columns).Add(new EncodedVector([1], [double.PositiveInfinity]), 1));
        Assert.Throws<ArgumentException>(() => new SparseRows(columns).Add(new EncodedVector([1], [1]), 2));
    }

    [Fact]
    public void Bytes_ManyOneHotRows_AreFourAnEntryAndNineARow()
    {
        var rows = new SparseRows(new SparseColumns());
        int[] slots = new int[5];
        for (int i = 0; i < 20_000; i++)
        {
            for (int k = 0; k < 5; k++) slots[k] = 100 * k + i % (7 * k + 5);
            rows.Add(new EncodedVector(slots, [1, 1, 1, 1, 1]), i & 1);
        }
        rows.Trim();
        Assert.Equal(20_000 * (5 * 4 + 9), rows.Bytes);
    }

    private static SparseTable Weather(bool weighted)
    {
        var table = new SparseTable();
        int row = 0;
        foreach (string line in File.ReadLines(Path.Combine(TestData.Folder, "seattle_xy.csv")).Skip(1))
        {
            string[] cells = line.Split(',');
            double Number(int place) => double.Parse(cells[place], CultureInfo.InvariantCulture);
            int month = int.Parse(cells[0].AsSpan(5, 2), CultureInfo.InvariantCulture);
            int[] slots = [month - 1, 100 + (int)Math.Floor(Number(3) / 2), 200 + (int)Math.Floor(Number(5)), 300, 301];
            table.Add(slots, [1, 1, 1, Number(2), Number(4) / 10], (int)Number(1), weighted ? 1 + row++ % 3 : 1);
        }
        return table;
    }
}
