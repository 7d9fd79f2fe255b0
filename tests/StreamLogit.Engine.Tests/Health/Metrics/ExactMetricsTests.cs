using System.Collections.Immutable;
using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Tests.Health.Metrics;

/// <summary>Every exact metric on the out-of-sample predictions against R, scikit-learn and statsmodels (reference_health.json).</summary>
public class ExactMetricsTests
{
    private const double Exact = 1e-9;

    public static TheoryData<string> Names => Predictions.Names;

    [Theory, MemberData(nameof(Names))]
    public void LogLoss_Predictions_IsThatOfScikitLearn(string name)
    {
        var data = Predictions.Of(name);
        var logLoss = LogLossMean.Of(data.Groups.AsSpan());
        Assert.Equal(data.Value("logloss"), logLoss.Mean, Exact);
        // The textbook standard error of a mean, over single labels.
        double[] losses = [.. data.Probabilities.Select((p, i) => -Math.Log(data.Labels[i] == 1 ? p : 1 - p))];
        double mean = losses.Average();
        Assert.Equal(Math.Sqrt(losses.Sum(l => (l - mean) * (l - mean))) / losses.Length, logLoss.StandardError, Exact);
    }

    [Theory, MemberData(nameof(Names))]
    public void BrierDecomposition_TenEqualWidths_IsThatOfR(string name)
    {
        var data = Predictions.Of(name);
        double brier = data.Probabilities.Select((p, i) => (p - data.Labels[i]) * (p - data.Labels[i])).Average();
        var parts = BrierDecomposition.Of(Grouping.EqualWidth(data.Groups.AsSpan(), 10), brier);
        var (variance, covariance) = BrierDecomposition.WithinEqualWidth(data.Groups.AsSpan(), 10);
        Assert.Equal(data.Value("brier"), parts.Brier, Exact);
        Assert.Equal(data.Value("brier_skill"), parts.SkillScore, Exact);
        Assert.Equal(data.Value("murphy10", "rel"), parts.Reliability, Exact);
        Assert.Equal(data.Value("murphy10", "res"), parts.Resolution, Exact);
        Assert.Equal(data.Value("murphy10", "unc"), parts.Uncertainty, Exact);
        Assert.Equal(data.Value("murphy10", "wbv"), variance, Exact);
        Assert.Equal(data.Value("murphy10", "wbc"), covariance, Exact);
        Assert.Equal(variance - covariance, parts.WithinGroups, Exact);
    }

    [Fact]
    public void BrierDecomposition_WilksTable_IsThatOfR()
    {
        // Forecast frequencies p(y) and observed rates o(y) of the reliability table in Wilks, Statistical Methods in the Atmospheric Sciences.
        var wilks = HealthReference.Root.GetProperty("wilks");
        double[] y = wilks.GetProperty("y").Numbers(), rate = wilks.GetProperty("obar_i").Numbers(), share = wilks.GetProperty("p_y").Numbers();
        var groups = ImmutableArray.CreateRange(y.Select((p, i) => new CalibrationGroup(share[i], share[i] * p, share[i] * rate[i], 1)));
        double brier = y.Select((p, i) => share[i] * (rate[i] * (1 - p) * (1 - p) + (1 - rate[i]) * p * p)).Sum();
        var parts = BrierDecomposition.Of(groups, brier);
        Assert.Equal(wilks.GetProperty("rel").GetDouble(), parts.Reliability, 1e-12);
        Assert.Equal(wilks.GetProperty("res").GetDouble(), parts.Resolution, 1e-12);
        Assert.Equal(wilks.GetProperty("unc").GetDouble(), parts.Uncertainty, 1e-12);
        Assert.Equal(wilks.GetProperty("brier").GetDouble(), parts.Brier, 1e-12);
        Assert.Equal(0, parts.WithinGroups, 1e-12);
    }

    [Theory, MemberData(nameof(Names))]
    public void RocArea_Predictions_IsThatOfPRoc(string name)
    {
        var data = Predictions.Of(name);
        var area = RocArea.Of(data.Groups.AsSpan());
        double[] interval = data.Values("auc_delong_ci");
        Assert.Equal(data.Value("auc"), area.Area, Exact);
        Assert.Equal(0, area.ErrorBound);
        Assert.Equal(data.Value("auc_delong_var"), area.DeLongVariance, 1e-12);
        Assert.Equal(interval[0], area.DeLongInterval.Low, Exact);
        Assert.Equal(interval[2], area.DeLongInterval.High, Exact);
    }

    [Fact]
    public void RocArea_RatingsOfHanleyAndMcNeil_IsThePublishedOne()
    {
        // 58 normal and 51 abnormal images in five ratings: Hanley & McNeil, Radiology 143 (1982) 29, table I; area .893.
        var table = HealthReference.Root.GetProperty("hanley_mcneil");
        double[] normal = table.GetProperty("normal").Numbers(), abnormal = table.GetProperty("abnormal").Numbers();
        double[] probabilities = [.. Enumerable.Range(0, 5).SelectMany(r => Enumerable.Repeat(r / 10.0, (int)(normal[r] + abnormal[r])))];
        int[] labels = [.. Enumerable.Range(0, 5).SelectMany(r => Enumerable.Repeat(0, (int)normal[r]).Concat(Enumerable.Repeat(1, (int)abnormal[r])))];
        var area = RocArea.Of(ScoreGroups.Of(probabilities, labels).AsSpan());
        Assert.Equal(0.893, area.Area, 5e-4);
        Assert.Equal(table.GetProperty("auc").GetDouble(), area.Area, Exact);
        Assert.Equal(table.GetProperty("delong_se").GetDouble(), Math.Sqrt(area.DeLongVariance), Exact);
        Assert.Equal(table.GetProperty("hm_se_exponential").GetDouble(), Math.Sqrt(area.HanleyMcNeilVariance), Exact);
    }

    [Theory, MemberData(nameof(Names))]
    public void CoxCalibration_Predictions_IsThatOfRGlm(string name)
    {
        var data = Predictions.Of(name);
        var fit = CoxCalibration.Of(data.Groups.AsSpan());
        Assert.Equal(data.Value("cal_joint", "intercept"), fit.Intercept, Exact);
        Assert.Equal(data.Value("cal_joint", "slope"), fit.Slope, Exact);
        // R's glm takes the information of the iteration before the last.
        Assert.Equal(data.Value("cal_joint", "se_intercept"), fit.InterceptStandardError, 1e-7);
        Assert.Equal(data.Value("cal_joint", "se_slope"), fit.SlopeStandardError, 1e-7);
        Assert.Equal(data.Value("cal_in_the_large", "intercept"), fit.InTheLarge, Exact);
        Assert.Equal(data.Value("cal_in_the_large", "se"), fit.InTheLargeStandardError, 1e-7);
        Assert.Equal(data.Value("unreliability_LR_chi2_df2"), fit.LikelihoodRatio, Exact);
        Assert.Equal(data.Value("unreliability_p"), fit.PValue, Exact);
        Assert.Equal((0, 0), (fit.InterceptErrorBound, fit.SlopeErrorBound));
    }

    [Theory]
    [InlineData(new[] { 0.1, 0.2, 0.8, 0.9 }, new[] { 0, 0, 1, 1 })]
    [InlineData(new[] { 0.1, 0.2, 0.8, 0.9 }, new[] { 0, 0, 0, 0 })]
    [InlineData(new[] { 0.5, 0.5, 0.5, 0.5 }, new[] { 0, 1, 0, 1 })]
    [InlineData(new double[0], new int[0])]
    public void CoxCalibration_NoFiniteFit_IsNaN(double[] probabilities, int[] labels)
    {
        var fit = CoxCalibration.Of(ScoreGroups.Of(probabilities, labels).AsSpan());
        Assert.True(double.IsNaN(fit.Slope) && double.IsNaN(fit.Intercept) && double.IsNaN(fit.PValue));
    }

    [Theory, MemberData(nameof(Names))]
    public void HosmerLemeshow_EveryGroupingRule_IsThatOfR(string name)
    {
        var data = Predictions.Of(name);
        Check("type7", Grouping.QuantilesType7(data.Groups.AsSpan(), 10));
        Check("stata", Grouping.QuantilesType2(data.Groups.AsSpan(), 10));
        Check("fixed_width_H", Grouping.EqualWidth(data.Groups.AsSpan(), 10));

        void Check(string rule, ImmutableArray<CalibrationGroup> groups)
        {
            Assert.Equal(data.Values("hl", rule, "n"), groups.Select(g => g.Weight));
            Assert.Equal(data.Values("hl", rule, "obs"), groups.Select(g => g.Positive));
            Assert.All(data.Values("hl", rule, "exp").Zip(groups), pair => Assert.Equal(pair.First, pair.Second.Expected, Exact));
            var test = HosmerLemeshow.Of(groups);
            Assert.Equal(data.Value("hl", rule, "chi2"), test.Statistic, Exact);
            Assert.Equal((int)data.Value("hl", rule, "groups"), test.Groups);
            Assert.Equal(data.Value("hl", rule, "p_df_g"), test.PValue, Exact);
            Assert.Equal(data.Value("hl", rule, "p_df_g_minus_2"), test.PValueOfFit, Exact);
        }
    }

    [Theory]
    // Quantiles of type 2 as cut points, groups closed above: 23.7469 over 9 groups and 9.6461 over 10.
    [InlineData(Predictions.BirdStrikes, 23.7469, 9)]
    [InlineData(Predictions.Seattle, 9.6461, 10)]
    public void HosmerLemeshow_QuantilesType2_GivesThePublishedValues(string name, double statistic, int groups)
    {
        var test = HosmerLemeshow.Of(Grouping.QuantilesType2(Predictions.Of(name).Groups.AsSpan(), 10));
        Assert.Equal(statistic, test.Statistic, 5e-5);
        Assert.Equal(groups, test.Groups);
    }

    [Theory, MemberData(nameof(Names))]
    public void Spiegelhalter_Predictions_IsThatOfR(string name)
    {
        var data = Predictions.Of(name);
        var test = SpiegelhalterTest.Of(data.Groups.AsSpan());
        Assert.Equal(data.Value("spiegelhalter", "num"), test.Numerator, Exact);
        Assert.Equal(data.Value("spiegelhalter", "den"), Math.Sqrt(test.Variance), Exact);
        Assert.Equal(data.Value("spiegelhalter", "z"), test.Z, Exact);
        Assert.Equal(data.Value("spiegelhalter", "p_two_sided"), test.PValue, Exact);
    }

    [Theory, MemberData(nameof(Names))]
    public void CalibrationError_Predictions_IsThatOfRAndScikitLearn(string name)
    {
        var data = Predictions.Of(name);
        var groups = Grouping.EqualWidth(data.Groups.AsSpan(), 10);
        var error = CalibrationError.Of(groups);
        Assert.Equal(data.Values("ece10", "n"), groups.Select(g => g.Weight));
        Assert.All(data.Values("ece10", "mean_p").Zip(groups), pair => Assert.Equal(pair.First, pair.Second.MeanProbability, Exact));
        Assert.All(data.Values("ece10", "obs").Zip(groups), pair => Assert.Equal(pair.First, pair.Second.ObservedRate, Exact));
        Assert.Equal(data.Value("ece10", "ece"), error.Expected, Exact);
        Assert.Equal(data.Value("ece10", "mce"), error.Maximum, Exact);
        Assert.Equal(data.Value("ece10", "rms"), error.RootMeanSquare, Exact);
        Assert.Equal(data.Value("ece_equal_mass10"), CalibrationError.OfEqualSizes(data.Probabilities, data.Labels, 10), Exact);
    }

    [Theory, MemberData(nameof(Names))]
    public void IsotonicFit_Predictions_IsThatOfScikitLearn(string name)
    {
        var data = Predictions.Of(name);
        var blocks = IsotonicFit.Of(data.Groups.AsSpan());
        // The Brier score of fitted rates r over a block of n labels with k ones is k(1 - r)^2 + (n - k)r^2.
        double brier = blocks.Sum(b => b.Positive * Math.Pow(1 - b.ObservedRate, 2) + (b.Weight - b.Positive) * Math.Pow(b.ObservedRate, 2)) / data.Labels.Length;
        Assert.Equal((int)data.Value("isotonic_blocks"), blocks.Length);
        Assert.Equal(data.Value("isotonic_brier"), brier, Exact);
    }

    [Fact]
    public void IsotonicFit_SmallSequence_PoolsAdjacentViolators()
    {
        var example = HealthReference.Root.GetProperty("pav_small");
        Assert.All(example.GetProperty("fit").Numbers().Zip(IsotonicFit.Of(example.GetProperty("y").Numbers())), pair => Assert.Equal(pair.First, pair.Second, 1e-15));
        Assert.Equal([1.5, 1.5, 4], IsotonicFit.Of([2, 1, 4], [1, 1, 1]));
        Assert.Equal([1.25, 1.25, 4], IsotonicFit.Of([2, 1, 4], [1, 3, 1]));
    }

    [Fact]
    public void PopulationStability_WorkedExample_IsTheSumOfBothDivergences()
    {
        var example = HealthReference.Root.GetProperty("psi_example");
        double[] expected = example.GetProperty("expected").Numbers(), actual = example.GetProperty("actual").Numbers();
        Assert.Equal(example.GetProperty("psi").GetDouble(), PopulationStability.Of(expected, actual), 1e-12);
        Assert.Equal(example.GetProperty("kl_sum").GetDouble(), PopulationStability.Of(actual, expected), 1e-12);
        Assert.Equal(0, PopulationStability.Of([3, 4, 0], [6, 8, 0]));
        Assert.Equal(double.PositiveInfinity, PopulationStability.Of([3, 4, 0], [6, 8, 1]));
    }

    [Theory]
    // Newcombe, Statistics in Medicine 17 (1998) 857, table I, score method without continuity correction.
    [InlineData(81, 263, 0.2553, 0.3662)]
    [InlineData(15, 148, 0.0624, 0.1605)]
    [InlineData(0, 20, 0.0000, 0.1611)]
    [InlineData(1, 29, 0.0061, 0.1718)]
    public void WilsonInterval_Counts_IsThePublishedOne(int ones, int trials, double low, double high)
    {
        var interval = WilsonInterval.Of((double)ones / trials, trials);
        Assert.Equal(low, interval.Low, 5.1e-5);
        Assert.Equal(high, interval.High, 5.1e-5);
    }
}
