using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine.Tests.Learning;

/// <summary>How much more than the true probabilities the default bank loses, on streams whose true probabilities are known.</summary>
public sealed class RegretTests
{
    private const int Events = 300_000;
    private const int Features = 20;

    /// <summary>At most 1.5 times (d/2) ln n, what any efficient estimator of d parameters loses (Rissanen 1986; Clarke &amp; Barron 1990).</summary>
    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(4)]
    [InlineData(5)]
    public void DefaultBank_StationaryStream_LosesLittleMoreThanEfficient(int seed)
    {
        (double regret, _) = Regret(seed, eventsPerDraw: Events);
        Report(regret, 1.5 * Features / 2 * Math.Log(Events));
        Assert.InRange(regret, 0, 1.5 * Features / 2 * Math.Log(Events));
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    public void DefaultBank_DriftingStream_LosesLessThanEverySettingInHindsight(int seed)
    {
        (double regret, double[] settings) = Regret(seed, eventsPerDraw: 50_000);
        Report(regret, settings.Min());
        Assert.InRange(regret, 0, settings.Min());
    }

    private static (double Blend, double[] Settings) Regret(int seed, int eventsPerDraw)
    {
        var random = new Random(seed);
        var stream = new BankStream(new Bank(new LearningOptions { Bank = DefaultBank.DenseSettings }, Features, firstDenseSlot: 0), Features);
        double[] coefficients = new double[Features], x = new double[Features];
        double least = 0;
        for (int i = 0; i < Events; i++)
        {
            if (i % eventsPerDraw == 0)
                for (int j = 0; j < Features; j++) coefficients[j] = 0.6 * Gaussian(random);
            double z = -3;
            for (int j = 0; j < Features; j++)
            {
                x[j] = Gaussian(random);
                z += coefficients[j] * x[j];
            }
            int label = random.NextDouble() < PlainRules.Sigmoid(z) ? 1 : 0;
            least += BankStream.Loss(z, label);
            stream.Next(x, label);
        }
        return (stream.PublishedLoss - least, [.. Enumerable.Range(0, stream.Bank.SettingCount).Select(s => stream.Bank.LogLossTotal(s) - least)]);
    }

    // Box & Muller 1958.
    private static double Gaussian(Random random) =>
        Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble());

    private static void Report(double regret, double bound) =>
        TestContext.Current.TestOutputHelper?.WriteLine(FormattableString.Invariant($"regret {regret:F1} nats, bound {bound:F1}"));
}
