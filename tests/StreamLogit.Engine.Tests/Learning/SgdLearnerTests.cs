using System.Text.Json;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine.Tests.Learning;

public sealed class SgdLearnerTests
{
    public static TheoryData<string, int, bool> Traces()
    {
        var traces = new TheoryData<string, int, bool>();
        foreach (string stream in RealStreams.Names)
            for (int run = 0; run < 3; run++)
            {
                traces.Add(stream, run, true);
                traces.Add(stream, run, false);
            }
        return traces;
    }

    /// <summary>Source: tests/data/reference.json, computed by a plain program and confirmed by scikit-learn 1.2.1.</summary>
    [Theory]
    [MemberData(nameof(Traces))]
    public void Learn_RealStream_ReproducesReferenceTrace(string stream, int run, bool isFresh)
    {
        JsonElement reference = TestData.Reference.GetProperty("sgd_one_event_at_a_time").GetProperty(stream).GetProperty("runs")[run];
        JsonElement config = reference.GetProperty("config");
        double decay = config.GetProperty("schedule").GetString() == "constant" ? 0 : config.GetProperty("power_t").GetDouble();
        var setting = new SgdSetting(config.GetProperty("eta0").GetDouble(), decay, config.GetProperty("alpha").GetDouble());
        LabelledRow[] rows = RealStreams.Read(stream);
        int features = rows[0].Values.Length;
        var bank = new Bank(BankStream.Options(setting), features);
        var learner = new BankStream(bank, features);

        int compared = 0;
        for (int i = 0; i < rows.Length; i++)
        {
            learner.Next(rows[i].Values, rows[i].Label, isFresh: isFresh);
            if (!reference.GetProperty("plain").TryGetProperty($"{i + 1}", out JsonElement expected)) continue;
            AssertClose(expected.GetProperty("b").GetDouble(), bank.Intercept(0));
            AssertClose(expected.GetProperty("cum_log_loss").GetDouble(), bank.LogLossTotal(0));
            for (int j = 0; j < features; j++) AssertClose(expected.GetProperty("w")[j].GetDouble(), bank.Coefficient(j, 0));
            compared++;
        }
        Assert.True(compared >= 5);
    }

    [Theory]
    [InlineData(0.5)]
    [InlineData(0.01)]
    [InlineData(0.999)]
    public void Score_NothingLearned_GivesTheStartProbability(double probability)
    {
        var bank = new Bank(BankStream.Options(new SgdSetting(0.1, 0, 0), new SgdSetting(0.2, 0, 0)) with { StartProbability = probability }, 1);

        double logOdds = new BankStream(bank, 1).Next([3.5], label: 1);

        Assert.Equal(probability, 1 / (1 + Math.Exp(-logOdds)), 1e-15);
        Assert.Equal(Math.Log(probability / (1 - probability)) + 0.2 * (1 - probability), bank.Intercept(1), 1e-14);
    }

    private static void AssertClose(double expected, double actual) =>
        Assert.InRange(Math.Abs(actual - expected), 0, 1e-12 * Math.Max(1, Math.Abs(expected)));
}
