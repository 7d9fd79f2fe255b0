using System.Diagnostics;
using System.Globalization;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>The learning room alone: score, then learn, over rows of 12 features that are encoded already.</summary>
internal static class EngineRatios
{
    private const int Rows = 200_000;
    private const int Features = 12;
    private static readonly double[] Values = new double[Rows * Features];
    private static readonly int[] Labels = new int[Rows];
    private static readonly int[] Slots = [.. Enumerable.Range(0, Features)];

    static EngineRatios()
    {
        var random = new Random(1);
        for (int row = 0; row < Rows; row++)
        {
            double logOdds = -1;
            for (int i = 0; i < Features; i++)
            {
                double value = random.NextDouble() * 2 - 1;
                Values[row * Features + i] = value;
                logOdds += value * (i % 3 - 1);
            }
            Labels[row] = random.NextDouble() < 1 / (1 + Math.Exp(-logOdds)) ? 1 : 0;
        }
    }

    public static double MillionEventsPerSecond(int settings)
    {
        var bank = NewBank(settings);
        var logOdds = new double[settings];
        return Rows / Pairs.LeastSeconds(() => OnePass(bank, logOdds)) / 1e6;
    }

    public static double AllocatedBytesPerEvent()
    {
        var bank = NewBank(16);
        var logOdds = new double[16];
        for (int i = 0; i < 5; i++) OnePass(bank, logOdds);
        long before = GC.GetAllocatedBytesForCurrentThread();
        OnePass(bank, logOdds);
        return (GC.GetAllocatedBytesForCurrentThread() - before) / (double)Rows;
    }

    /// <summary>Setting-updates per second of the bank over rows per second of scikit-learn, which learns only, in one big call.</summary>
    public static double AgainstScikitLearn(int settings)
    {
        double scikit = ScikitLearnMillionRowsPerSecond();
        return settings * MillionEventsPerSecond(settings) / scikit;
    }

    private static void OnePass(Bank bank, double[] logOdds)
    {
        for (int row = 0; row < Rows; row++)
        {
            var x = new EncodedVector(Slots, Values.AsSpan(row * Features, Features));
            bank.Score(x, 0, logOdds);
            bank.Learn(x, logOdds, isFresh: true, Labels[row], 1, 0);
        }
    }

    private static Bank NewBank(int settings) => new(
        new LearningOptions
        {
            Bank = [.. Enumerable.Range(0, settings).Select(i => new SgdSetting(0.001 * (i + 1), 0, 1e-6))],
            PublishedSetting = null,
        },
        slotCount: 4096);

    private static double ScikitLearnMillionRowsPerSecond()
    {
        const string Script = """
            import time
            import numpy as np
            from sklearn.linear_model import SGDClassifier
            rng = np.random.default_rng(1)
            rows = 2000000
            x = rng.uniform(-1, 1, (rows, 12))
            y = (rng.uniform(size=rows) < 1 / (1 + np.exp(1 - x @ (np.arange(12) % 3 - 1)))).astype(int)
            model = SGDClassifier(loss="log_loss", learning_rate="constant", eta0=0.01, alpha=1e-6, shuffle=False)
            model.partial_fit(x[:1000], y[:1000], classes=[0, 1])
            times = []
            for _ in range(9):
                start = time.perf_counter()
                model.partial_fit(x, y)
                times.append(time.perf_counter() - start)
            print(rows / min(times) / 1e6)
            """;
        // Debian's python3-sklearn belongs to the system's Python.
        var start = new ProcessStartInfo("/usr/bin/python3", ["-c", Script]) { RedirectStandardOutput = true };
        using var process = Process.Start(start) ?? throw new InvalidOperationException("python3 does not start");
        string output = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        if (process.ExitCode != 0) throw new InvalidOperationException("scikit-learn is not there: apt-get install python3-sklearn");
        return double.Parse(output, CultureInfo.InvariantCulture);
    }
}
