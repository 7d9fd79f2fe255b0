using System.Text.Json;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine.Tests.Learning;

public sealed class NewtonLearnerTests
{
    /// <summary>
    /// Without forgetting and with a vague prior, repeated passes approach the maximum likelihood fit. Source: R 4.2.2, glm
    /// (tests/data/reference.json). After K passes the posterior is that of K times the data, and what the first labels did wrong counts 1/K.
    /// </summary>
    [Theory]
    [InlineData("oring_binary", 3000)]
    [InlineData("seattle_first1095", 60)]
    [InlineData("birdstrikes_first5000", 100)]
    public void Learn_ManyPasses_ApproachesGlm(string fit, int passes)
    {
        JsonElement glm = TestData.Reference.GetProperty("R").GetProperty(fit).GetProperty("glm");
        string[] names = [.. glm.GetProperty("coef").EnumerateObject().Select(c => c.Name).Skip(1)];
        LabelledRow[] rows = [.. Rows(fit, names).Take(glm.GetProperty("n").GetInt32())];
        var bank = new Bank(BankStream.Options(new NewtonSetting(1, 1e4)), names.Length, firstDenseSlot: 0);
        var learner = new BankStream(bank, names.Length);
        for (int pass = 0; pass < passes; pass++)
            foreach (LabelledRow row in rows) learner.Next(row.Values, row.Label);

        AssertWithinHundredthOfStandardError(glm, "(Intercept)", bank.Intercept(0));
        for (int j = 0; j < names.Length; j++) AssertWithinHundredthOfStandardError(glm, names[j], bank.Coefficient(j, 0));
    }

    [Theory]
    [InlineData(0)]
    [InlineData(513)]
    public void Bank_UnsuitableDenseSlots_IsRefused(int dense)
    {
        var refusal = Assert.Throws<ArgumentException>(() => new Bank(BankStream.Options(new NewtonSetting(1, 1)), 8 + dense, firstDenseSlot: 8));
        Assert.Contains($"there are {dense}", refusal.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Learn_SlotsBeforeTheDenseOnes_StayWithoutCoefficient()
    {
        var bank = new Bank(BankStream.Options(new NewtonSetting(1, 1)), 3, firstDenseSlot: 1);
        var learner = new BankStream(bank, 3);
        for (int i = 0; i < 10; i++) learner.Next([1, i % 3, i % 2], i % 2);
        Assert.Equal(0, bank.Coefficient(0, 0));
        Assert.Equal(2, bank.NonZeroCount(0));
        Assert.True(bank.Coefficient(2, 0) > 0.5);
    }

    // R fitted the O-rings on the temperature itself, far from 0; the same line through (temp - 70) / 10 is better conditioned.
    private static IEnumerable<LabelledRow> Rows(string fit, string[] names) => fit switch
    {
        "oring_binary" => TestData.Columns("oring_launch_order.csv", ["fail", .. names]).Select(v => new LabelledRow([v[1]], (int)v[0])),
        "seattle_first1095" => TestData.Columns("seattle_xy.csv", ["y", .. names]).Select(v => new LabelledRow(v[1..], (int)v[0])),
        _ => TestData.Columns("birdstrikes_xy.csv", ["y", .. names]).Select(v => new LabelledRow(v[1..], (int)v[0])),
    };

    private static void AssertWithinHundredthOfStandardError(JsonElement glm, string name, double coefficient)
    {
        double difference = coefficient - glm.GetProperty("coef").GetProperty(name).GetDouble();
        double errors = Math.Abs(difference) / glm.GetProperty("se").GetProperty(name).GetDouble();
        Assert.True(errors <= 1e-2, $"{name} is {coefficient}, {errors} standard errors off");
    }
}
