using System.Globalization;
using System.Text.Json;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Tests.Numerics;

/// <summary>Source of the certified values: NIST StRD, univariate summary statistics (tests/data/SOURCES.md).</summary>
public sealed class RunningMomentsTests
{
    /// <summary>Digits: -log10 of the relative error, at most 15 (McCullough, The American Statistician 52, 1998, 358).</summary>
    [Theory]
    [InlineData("Lew", 14.9, 14.9)]
    [InlineData("Lottery", 14.9, 14.9)]
    [InlineData("Mavro", 14.9, 12)]
    [InlineData("Michelso", 14.9, 12.3)]
    [InlineData("NumAcc1", 14.9, 14.9)]
    [InlineData("NumAcc2", 14.9, 14.9)]
    [InlineData("NumAcc3", 14.9, 9.4)]
    [InlineData("NumAcc4", 14.9, 8.2)]
    public void Add_NistSet_HasThatManyCertifiedDigits(string set, double meanDigits, double deviationDigits)
    {
        var moments = new RunningMoments();
        foreach (double[] row in TestData.Columns($"nist/{set}.csv", "y")) moments.Add(row[0]);

        JsonElement reference = TestData.Reference.GetProperty("nist_strd_univariate").GetProperty(set);
        Assert.Equal(reference.GetProperty("n").GetInt32(), moments.Count);
        Assert.InRange(Digits(moments.Mean, reference, "mean"), meanDigits, 15);
        Assert.InRange(Digits(moments.StandardDeviation, reference, "sd"), deviationDigits, 15);
    }

    [Fact]
    public void Variance_FewValues_IsZero()
    {
        var moments = new RunningMoments();
        Assert.Equal((0, 0), (moments.Mean, moments.Variance));
        moments.Add(-1e15);
        Assert.Equal((-1e15, 0), (moments.Mean, moments.Variance));
        moments.Add(1e15);
        Assert.Equal((0, 2e30), (moments.Mean, moments.Variance));
    }

    private static double Digits(double computed, JsonElement reference, string name)
    {
        double certified = double.Parse(reference.GetProperty("certified").GetProperty(name).GetString()!, CultureInfo.InvariantCulture);
        return computed == certified ? 15 : Math.Min(15, -Math.Log10(Math.Abs(computed - certified) / Math.Abs(certified)));
    }
}
