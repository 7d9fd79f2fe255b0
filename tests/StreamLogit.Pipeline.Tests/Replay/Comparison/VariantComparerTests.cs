using System.Globalization;
using StreamLogit.Pipeline.Replay.Comparison;

namespace StreamLogit.Pipeline.Tests.Replay.Comparison;

public sealed class VariantComparerTests
{
    private const long Hour = SimulatedPair.Hour;
    private const long Day = 24 * Hour;

    [Theory]
    // Log-loss, Brier score and AUC of out-of-sample predictions: R 4.2.2 (glm, pROC 1.18.0) and scikit-learn 1.2.1, which agree to 1e-15.
    [InlineData("pred_birdstrikes_last5000_outofsample.csv", 0.2988048795132183, 0.08549153698101791, 0.7501467272109474)]
    [InlineData("pred_seattle_rest_outofsample.csv", 0.5553979939204259, 0.187423978756774, 0.7755153343388639)]
    public void Result_PublishedPredictions_GivesTheFiguresOfRAndScikitLearn(string file, double logLoss, double brier, double auc)
    {
        var comparer = new VariantComparer(["half", "glm"], new ComparisonOptions());
        int row = 0;
        double probabilities = 0;
        foreach (var (p, label) in Predictions(file))
        {
            long time = row++ * Hour;
            comparer.Add([0, Math.Log(p) - Math.Log(1 - p)], label, 1, time, time, []);
            probabilities += p;
        }
        var result = comparer.Result();
        var glm = result.Variants[0].Figures;
        Assert.Equal(logLoss, glm.LogLoss, 1e-12);
        Assert.Equal(brier, glm.Brier, 1e-12);
        Assert.Equal(auc, glm.Auc, 3e-4);
        Assert.Equal(probabilities / row, glm.MeanProbability, 1e-12);
        Assert.Equal(Math.Log(2), result.Reference.LogLoss, 1e-12);
        Assert.Equal(0.5, result.Reference.Auc, 1e-12);
        Assert.Equal(logLoss - Math.Log(2), result.Variants[0].Losses.LogLoss.Value, 1e-12);
        Assert.Equal(auc - 0.5, result.Variants[0].Auc.Value, 3e-4);
        Assert.InRange(auc - 0.5, result.Variants[0].Auc.Low, result.Variants[0].Auc.High);
        Assert.Equal(row, result.Count);
    }

    [Fact]
    public void Result_Auc_IsThatOfAllPairs()
    {
        var random = new Random(3);
        var comparer = new VariantComparer(["a", "b"], new ComparisonOptions());
        var events = new List<(double A, double B, int Label, double Weight)>();
        for (int i = 0; i < 1500; i++)
        {
            double truth = random.NextDouble() * 4 - 3;
            int label = random.NextDouble() < 1 / (1 + Math.Exp(-truth)) ? 1 : 0;
            events.Add((truth + random.NextDouble(), truth + 2 * random.NextDouble(), label, 1 + random.Next(3)));
            var (a, b, _, weight) = events[^1];
            comparer.Add([a, b], label, weight, i * Hour, i * Hour, []);
        }
        double Auc(Func<(double A, double B, int Label, double Weight), double> score)
        {
            double won = 0, pairs = 0;
            foreach (var one in events.Where(e => e.Label == 1))
                foreach (var zero in events.Where(e => e.Label == 0))
                {
                    double weight = one.Weight * zero.Weight;
                    pairs += weight;
                    won += score(one) > score(zero) ? weight : score(one) == score(zero) ? weight / 2 : 0;
                }
            return won / pairs;
        }
        var result = comparer.Result();
        Assert.Equal(Auc(e => e.A), result.Reference.Auc, 5e-4);
        Assert.Equal(Auc(e => e.B) - Auc(e => e.A), result.Variants[0].Auc.Value, 6e-4);
    }

    [Fact]
    public void Result_Costs_AreThoseOfTheDecisions()
    {
        var comparer = new VariantComparer(["never", "always"], new ComparisonOptions { Cost = new DecisionCost(0.5, 1, 10) });
        for (int i = 0; i < 100; i++) comparer.Add([-1, 1], i < 20 ? 1 : 0, 1, i * Hour, i * Hour, []);
        var result = comparer.Result();
        Assert.Equal(0.2 * 10, result.Reference.Cost, 1e-12);
        Assert.Equal(0.8, result.Variants[0].Figures.Cost, 1e-12);
        Assert.Equal(0.8 - 2, result.Variants[0].Losses.Cost.Value, 1e-12);

        // At the cutoff both decisions are expected to cost the same.
        var cost = DecisionCost.OfCutoff(0.2);
        Assert.Equal(0.8 * cost.FalseAlarm, 0.2 * cost.Miss, 1e-15);
    }

    [Fact]
    public void Result_DaysAndSlices_AddUpToTheWhole()
    {
        var comparer = new VariantComparer(["a", "b"], new ComparisonOptions());
        int[] slices = [comparer.AddSlice("web"), comparer.AddSlice("desk"), comparer.AddSlice("nobody")];
        int count = 0;
        new SimulatedPair(7, 0.5, 0.3).Run(25, 4, (a, b, _, label, time) =>
            comparer.Add([a, b], label, 1 + count % 3, time, time + 100 * Day, [slices[count++ % 2]]));
        var result = comparer.Result();
        Assert.Equal(25, result.Days.Length);
        Assert.Equal([0, Day, 2 * Day], result.Days.Take(3).Select(d => d.StartMicroseconds));
        Assert.Equal(["web", "desk"], result.Slices.Select(s => s.Name));
        Assert.Equal(count, result.Days.Sum(d => d.Count));
        Assert.Equal(count, result.Slices.Sum(s => s.Count));

        // Weights are 1, 2, 3 in turn, so every day of 96 events has the same sum of them.
        var whole = result.Variants[0].Losses;
        Assert.Equal(whole.LogLoss.Value, result.Days.Average(d => d.Variants[0].LogLoss), 1e-12);
        Assert.Equal(whole.Brier.Value, result.Days.Average(d => d.Variants[0].Brier), 1e-12);
        Assert.Equal(whole.Cost.Value, result.Slices.Average(s => s.Variants[0].Cost.Value), 1e-12);
        Assert.Equal(result.Reference.LogLoss, result.Slices.Average(s => s.Reference.LogLoss), 1e-12);
        Assert.All(result.Slices, s => Assert.InRange(s.Variants[0].LogLoss.Value, s.Variants[0].LogLoss.Low, s.Variants[0].LogLoss.High));
    }

    [Fact]
    public void TakeBack_WrongLabels_LeavesWhatTheRightOnesGive()
    {
        var (corrected, right) = (new VariantComparer(["a", "b"], new ComparisonOptions()), new VariantComparer(["a", "b"], new ComparisonOptions()));
        int slice = corrected.AddSlice("all"), count = 0;
        Assert.Equal(slice, right.AddSlice("all"));
        new SimulatedPair(8, 0.5, 0.3).Run(15, 4, (a, b, _, label, time) =>
        {
            right.Add([a, b], label, 2, time, time, [slice]);
            bool isWrong = count++ % 5 == 0;
            corrected.Add([a, b], isWrong ? 1 - label : label, 2, time, time, [slice]);
            if (!isWrong) return;
            corrected.TakeBack([a, b], 1 - label, 2, time, [slice]);
            corrected.AddCorrection([a, b], label, 2, time, [slice]);
        });
        var (x, y) = (corrected.Result(), right.Result());
        Assert.Equal(y.Count, x.Count);
        Assert.Equal(y.ObservedRate, x.ObservedRate, 1e-12);
        Assert.Equal(y.Variants[0].Losses.LogLoss.Value, x.Variants[0].Losses.LogLoss.Value, 1e-12);
        Assert.Equal(y.Variants[0].Losses.Brier.High, x.Variants[0].Losses.Brier.High, 1e-12);
        Assert.Equal(y.Variants[0].Auc.Value, x.Variants[0].Auc.Value, 1e-12);
        Assert.Equal(y.Slices[0].Variants[0].Cost.Value, x.Slices[0].Variants[0].Cost.Value, 1e-12);
    }

    [Theory]
    [InlineData(30, Day, 30)]
    [InlineData(10, Day, 10)]
    [InlineData(9, 8 * Hour, 27)]
    [InlineData(3, 4 * Hour, 18)]
    [InlineData(9000, 4 * Day, 2250)]
    public void Result_StreamsOfAnyLength_HaveEnoughBlocks(int days, long blockMicroseconds, int blocks)
    {
        var comparer = new VariantComparer(["a", "b"], new ComparisonOptions { Resamples = 100 });
        for (long hour = 0; hour < 24L * days; hour++) comparer.Add([0, 0.1], hour % 3 == 0 ? 1 : 0, 1, hour * Hour, hour * Hour, []);
        var result = comparer.Result();
        Assert.Equal(blockMicroseconds, result.BlockMicroseconds);
        Assert.Equal(blocks, result.Blocks);
        Assert.Equal(24L * days, result.Count);
    }

    [Fact]
    public void Result_TwiceTheSameLabels_GivesTheSameBits()
    {
        var (a, b) = (Run(11), Run(11));
        Assert.Equal(a.Variants, b.Variants);
        Assert.Equal(a.Variants.Length, Run(12).Variants.Length);
        Assert.NotEqual(a.Variants[0].Losses.LogLoss.Low, Run(12).Variants[0].Losses.LogLoss.Low);

        static ComparisonResult Run(ulong seed)
        {
            var comparer = new VariantComparer(["a", "b"], new ComparisonOptions { Seed = seed });
            new SimulatedPair(9, 0.5, 0.4).Run(30, 4, (a, b, _, label, time) => comparer.Add([a, b], label, 1, time, time, []));
            return comparer.Result();
        }
    }

    [Fact]
    public void Add_AfterWarmUp_AllocatesNothing()
    {
        var comparer = new VariantComparer(["a", "b", "c"], new ComparisonOptions());
        int slice = comparer.AddSlice("all");
        double[] logOdds = [0.1, 0.2, 0.3];
        int[] slices = [slice];
        for (int i = 0; i < 1000; i++) comparer.Add(logOdds, i & 1, 1, i % 24 * Hour, i, slices);
        long before = GC.GetAllocatedBytesForCurrentThread();
        for (int i = 0; i < 10_000; i++) comparer.Add(logOdds, i & 1, 1, i % 24 * Hour, i, slices);
        Assert.Equal(0, GC.GetAllocatedBytesForCurrentThread() - before);
    }

    [Fact]
    public void Result_FewLabels_HasNoIntervalsAndNoAuc()
    {
        var comparer = new VariantComparer(["a", "b"], new ComparisonOptions());
        comparer.Add([0, 1], 1, 1, 0, 0, []);
        var variant = comparer.Result().Variants[0];
        Assert.True(double.IsNaN(variant.Losses.LogLoss.Low));
        Assert.True(double.IsNaN(variant.Auc.Value));
        Assert.Equal(Math.Log(1 + Math.Exp(-1)) - Math.Log(2), variant.Losses.LogLoss.Value, 1e-12);
        Assert.Equal(1, variant.Better.PValue);
    }

    [Fact]
    public void Add_UnusableValues_Throws()
    {
        var comparer = new VariantComparer(["a", "b"], new ComparisonOptions());
        Assert.Throws<ArgumentException>(() => comparer.Add([0], 1, 1, 0, 0, []));
        Assert.Throws<ArgumentException>(() => comparer.Add([0, double.NaN], 1, 1, 0, 0, []));
        Assert.Throws<ArgumentException>(() => comparer.Add([0, 0], 2, 1, 0, 0, []));
        Assert.Throws<ArgumentException>(() => comparer.Add([0, 0], 1, -1, 0, 0, []));
        Assert.Throws<ArgumentException>(() => new VariantComparer([], new ComparisonOptions()));
        Assert.Throws<ArgumentException>(() => new VariantComparer(["a"], new ComparisonOptions { Level = 1 }));
        Assert.Throws<ArgumentException>(() => new VariantComparer(["a"], new ComparisonOptions { Resamples = 10 }));
    }

    private static IEnumerable<(double P, int Label)> Predictions(string file) =>
        File.ReadLines(DataFile(file)).Skip(1).Select(line => line.Split(',')).Select(cells =>
            (double.Parse(cells[0], CultureInfo.InvariantCulture), int.Parse(cells[1], CultureInfo.InvariantCulture)));

    private static string DataFile(string name)
    {
        for (DirectoryInfo? folder = new(AppContext.BaseDirectory); folder is not null; folder = folder.Parent)
        {
            string path = Path.Combine(folder.FullName, "tests", "data", name);
            if (File.Exists(path)) return path;
        }
        throw new FileNotFoundException($"tests/data/{name} is in no folder above the test program");
    }
}
