using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine.Tests.Learning;

/// <summary>Every rule against an independent one of a few lines, on three real streams, side by side in one bank.</summary>
public sealed class UpdateRuleTests
{
    private const double Tolerance = 1e-10;
    private const long Hour = 3_600_000_000;

    private static readonly (SettingOptions Setting, Func<double[], PlainRules.LogOddsThenLearn> Plain)[] Rules =
    [
        (new SgdSetting(0.05, 0, 0), w => PlainRules.Sgd(w, 0.05, 0, 0, 0)),
        (new SgdSetting(0.3, 0.25, 1e-3), w => PlainRules.Sgd(w, 0.3, 0.25, 1e-3, 0)),
        (new SgdSetting(0.5, 1, 0.1) { ForgetHalfLifeMicroseconds = 200 * Hour }, w => PlainRules.Sgd(w, 0.5, 1, 0.1, 200.0 * Hour)),
        (new SgdSetting(0.5, 0, 0.1), w => PlainRules.Sgd(w, 0.5, 0, 0.1, 0)), // the scale becomes small and is folded
        (new SgdSetting(2, 0, 0) { IsOvershootProof = true }, w => PlainRules.OvershootProofSgd(w, 2)),
        (new SgdSetting(2, 0, 0.7), w => PlainRules.Sgd(w, 2, 0, 0.7, 0)),
        (new AdagradSetting(0.1, 0), w => PlainRules.Adagrad(w, 0.1, 0, 0)),
        (new AdagradSetting(0.02, 50), w => PlainRules.Adagrad(w, 0.02, 50, 0)),
        (new AdagradSetting(0.02, 2) { ForgetHalfLifeMicroseconds = 24 * Hour }, w => PlainRules.Adagrad(w, 0.02, 2, 24.0 * Hour)),
        (new FtrlSetting(0.1, 1, 0, 0), w => PlainRules.Ftrl(w, 0.1, 1, 0, 0)),
        (new FtrlSetting(0.2, 0.5, 0.8, 0.1), w => PlainRules.Ftrl(w, 0.2, 0.5, 0.8, 0.1)),
        (new FtrlSetting(0.2, 0.5, 0.8, 0.1) { ForgetHalfLifeMicroseconds = 24 * Hour }, w => PlainRules.Ftrl(w, 0.2, 0.5, 0.8, 0.1, 24.0 * Hour)),
        (new NewtonSetting(1, 10), w => PlainRules.Newton(w, 1, 10)),
        (new NewtonSetting(0.998, 10), w => PlainRules.Newton(w, 0.998, 10)),
        (new NewtonSetting(0.9995, 1) { ForgetHalfLifeMicroseconds = 500 * Hour }, w => PlainRules.Newton(w, 0.9995, 1, 500.0 * Hour)),
    ];

    [Theory]
    [InlineData("oring", true)]
    [InlineData("oring", false)]
    [InlineData("seattle", true)]
    [InlineData("birdstrikes", false)]
    public void Learn_RealStream_EqualsPlainRule(string stream, bool isFresh)
    {
        LabelledRow[] rows = RealStreams.Read(stream);
        int features = rows[0].Values.Length;
        var bank = new Bank(BankStream.Options([.. Rules.Select(rule => rule.Setting)]), features, firstDenseSlot: 0);
        var learner = new BankStream(bank, features);
        double[][] coefficients = [.. Rules.Select(_ => new double[features + 1])];
        PlainRules.LogOddsThenLearn[] plain = [.. Rules.Select((rule, i) => rule.Plain(coefficients[i]))];

        var random = new Random(5);
        long time = 1_000_000_000_000_000;
        for (int i = 0; i < rows.Length; i++)
        {
            double elapsed = i == 0 ? 0 : random.Next(1, 1000) * 60_000_000.0;
            double weight = i % 3 == 0 ? 1 : random.NextDouble() * 3;
            time += (long)elapsed;
            learner.Next(rows[i].Values, rows[i].Label, weight, isFresh, time);
            for (int setting = 0; setting < Rules.Length; setting++)
                AssertClose(plain[setting](rows[i].Values, rows[i].Label, weight, elapsed), learner.LogOdds[setting], bank.Names[setting], i);
        }
        for (int setting = 0; setting < Rules.Length; setting++)
        {
            AssertClose(coefficients[setting][features], bank.Intercept(setting), bank.Names[setting], rows.Length);
            for (int j = 0; j < features; j++)
                AssertClose(coefficients[setting][j], bank.Coefficient(j, setting), bank.Names[setting], rows.Length);
        }
    }

    private static void AssertClose(double expected, double actual, string setting, int row) =>
        Assert.True(Math.Abs(actual - expected) <= Tolerance * Math.Max(1, Math.Abs(expected)), $"{setting}, row {row}: {actual} instead of {expected}");
}
