using System.Diagnostics;
using System.Globalization;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Benchmarks.Learning;

/// <summary>
/// How the cost of scoring and learning grows with the slots and the settings: rows of 6 dense entries and 6 hashed ones that fall anywhere among
/// the slots, which is the worst that categories can do to caches.
/// </summary>
internal static class BankCosts
{
    private const int Rows = 1 << 18;
    private const int HashedEntries = 6;
    private static readonly int[] SlotExponents = [12, 14, 16, 18, 20, 22, 24];
    private static readonly int[] SettingCounts = [1, 2, 4, 8, 16, 32, 64];

    /// <summary>Prints a line for each number of slots and of settings.</summary>
    /// <param name="mostGibibytes">Tables above this are left out.</param>
    public static int Print(double mostGibibytes)
    {
        Console.WriteLine("slots\tsettings\ttable_mib\tmillion_events_per_second\tmillion_setting_updates_per_second");
        foreach (int exponent in SlotExponents)
        {
            var rows = new EncodedRows(Rows, 1 << exponent, HashedEntries);
            foreach (int settings in SettingCounts)
            {
                var options = new LearningOptions
                {
                    Slots = 1 << exponent,
                    Bank = [.. Enumerable.Range(1, settings).Select(i => new SgdSetting(0.001 * i, 0, 1e-6))],
                };
                double mebibytes = CoefficientTables.Bytes(options) / 1048576.0;
                if (mebibytes > mostGibibytes * 1024) continue;
                double million = MillionEventsPerSecond(options, rows);
                Console.WriteLine(string.Create(
                    CultureInfo.InvariantCulture, $"2^{exponent}\t{settings}\t{mebibytes:G4}\t{million:F2}\t{million * settings:F1}"));
                GC.Collect();
            }
        }
        return 0;
    }

    private static double MillionEventsPerSecond(LearningOptions options, EncodedRows rows)
    {
        var bank = new Bank(options, rows.SlotCount, rows.FirstDenseSlot);
        double[] logOdds = new double[options.Bank.Length];
        for (int i = 0; i < 3; i++) OnePass(bank, rows, logOdds);

        // The quickest pass is the one that other work on the machine disturbed least.
        return rows.Count / Enumerable.Range(0, 12).Min(_ => OnePass(bank, rows, logOdds)) / 1e6;
    }

    private static double OnePass(Bank bank, EncodedRows rows, double[] logOdds)
    {
        var watch = Stopwatch.StartNew();
        for (int row = 0; row < rows.Count; row++)
        {
            EncodedVector x = rows[row];
            bank.Score(in x, 0, logOdds);
            bank.Learn(in x, logOdds, isFresh: true, rows.Label(row), 1, 0);
        }
        return watch.Elapsed.TotalSeconds;
    }
}
