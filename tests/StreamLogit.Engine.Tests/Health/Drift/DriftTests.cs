using System.Globalization;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health.Drift;
using StreamLogit.Engine.Health.Metrics;
using StreamLogit.Engine.Tests.Health.Detection;

namespace StreamLogit.Engine.Tests.Health.Drift;

public class DriftTests
{
    private static readonly HealthWindow Day = new("1d", LedgerRun.Day);

    [Fact]
    public void Drift_NothingMoves_StaysWithinWhatChanceGives()
    {
        int beyond95 = 0, features = 0;
        for (ulong seed = 1; seed <= 12; seed++)
        {
            var drift = DriftOf(Stream(seed, days: 5, (random, _) => (random.Normal(), Country(random), false)));
            foreach (var feature in drift.Features.Where(f => f.Feature is "amount" or "country"))
            {
                features++;
                if (feature.Psi > feature.PsiByChance95) beyond95++;
                Assert.InRange(feature.Psi, 0, 4 * feature.PsiByChance95);
                Assert.InRange(feature.Cells, 4, 12);
            }
        }
        Assert.InRange(beyond95, 0, 5);
        Assert.Equal(24, features);
    }

    [Fact]
    public void Drift_NumberShifts_RanksItFirstWithTheIndexOfTheShift()
    {
        var drift = DriftOf(Stream(1, days: 5, (random, day) => (random.Normal() + (day >= 4 ? 1 : 0), Country(random), false)));
        Assert.Equal("amount", drift.Features[0].Feature);
        // Both divergences between N(0, 1) and N(1, 1) come to 1 in nats; tenths lose a little of it.
        Assert.InRange(drift.Features[0].Psi, 0.8, 1.1);
        Assert.True(drift.Features[0].Psi > 5 * drift.Features[0].PsiByChance95);
        Assert.InRange(drift.Features.Single(f => f.Feature == "country").Psi, 0, 0.06);
    }

    [Fact]
    public void Drift_CategoryAndMissingValues_AreTold()
    {
        var drift = DriftOf(Stream(2, days: 5, (random, day) =>
            (random.Normal(), day >= 4 && random.Uniform() < 0.3 ? "ZZ" + (int)(random.Uniform() * 5) : Country(random), day >= 4 && random.Uniform() < 0.1)));
        var country = drift.Features.Single(f => f.Feature == "country");
        var amount = drift.Features.Single(f => f.Feature == "amount");
        Assert.True(country.Psi > 0.25);
        Assert.Equal(0.1, amount.MissingShare, 0.02);
        Assert.Equal(0, amount.ReferenceMissingShare);
        Assert.True(amount.Psi > 5 * amount.PsiByChance95);
        Assert.Equal(0, country.MissingShare);
    }

    [Fact]
    public void Drift_UnseenValues_AreCountedOnce()
    {
        var run = Run(Stream(3, days: 5, (random, day) => (random.Normal(), day >= 4 ? $"n{random.Uniform():F3}" : Country(random), false)));
        var drift = run.Engine.Health().Windows[0].Drift!;
        var country = drift.Features.Single(f => f.Feature == "country");
        // Up to 1,000 values for the first time among 2,880 events of the last day, less those whose slot was taken.
        Assert.InRange(country.UnseenShare * drift.Events, 200, 1000);
        Assert.Equal(4.0 / 5_760, country.ReferenceUnseenShare, 1e-3);
    }

    [Fact]
    public void Drift_ReferenceNotOver_IsNotTold()
    {
        var drift = DriftOf(Stream(4, days: 1, (random, _) => (random.Normal(), Country(random), false)));
        Assert.All(drift.Features, f => Assert.True(double.IsNaN(f.Psi)));
    }

    [Fact]
    public void Reference_OfTheDefinition_IsTheOneCounted()
    {
        var definition = DefinitionOf() with { Health = new HealthOptions { Windows = [Day], Reference = new HealthReferenceOptions { FromMicroseconds = LedgerRun.Day, LengthMicroseconds = LedgerRun.Day } } };
        var run = new EngineRun(definition).Take(Stream(5, days: 4, (random, _) => (random.Normal(), Country(random), false)), 1000);
        var reference = run.Engine.Health().Reference!;
        Assert.Equal((LedgerRun.Day, 2 * LedgerRun.Day, true), (reference.FromMicroseconds!.Value, reference.ToMicroseconds!.Value, reference.IsComplete));
        Assert.Equal(2_880, reference.Events);
        Assert.Equal(0.1, reference.ObservedRate, 0.03);
    }

    [Fact]
    public void PsiOf_ThinnedCounts_AreShrunkToWhatTheyTell()
    {
        // 64 events of weight 1 and 10 of weight 32: 384 events that tell as much as 384^2 / (64 + 10 * 1024) = 14.
        var counts = new DriftCounts([384, 64 + 10 * 1024], [.. Enumerable.Repeat(384.0 / 32, 32), 0]);
        var probe = new DriftProbe("x", DriftSource.Number, [0], firstCell: 0);
        Assert.Equal(384.0 * 384 / (64 + 10 * 1024), counts.EffectiveCount);
        Assert.Equal(0, DriftComparison.PsiOf(probe, counts, counts, out int cells), 1e-12);
        Assert.Equal(8, cells); // of four thirty-seconds each, the first number of them that reaches a tenth
    }

    [Fact]
    public void QuantileCells_FirstValues_CutThemIntoEqualParts()
    {
        var random = new FixedStream(6);
        var cells = new QuantileCells();
        while (!cells.Wait(random.Normal(), 1)) { }
        var counts = new int[QuantileCells.Count];
        foreach (double value in cells.Waiting) counts[cells.CellOf(value)]++;
        Assert.All(counts, c => Assert.Equal(16, c));
        Assert.Equal(0, cells.CellOf(double.MinValue));
        Assert.Equal(QuantileCells.Count - 1, cells.CellOf(double.MaxValue));

        var constant = new QuantileCells();
        while (!constant.Wait(7, 1)) { }
        Assert.Equal((0, 0, 1), (constant.CellOf(6), constant.CellOf(7), constant.CellOf(8)));
    }

    [Fact]
    public void ByChance_RandomCounts_IsTheMeanAndTheQuantileOfTheIndex()
    {
        var random = new FixedStream(8);
        var indices = new List<double>();
        for (int trial = 0; trial < 2000; trial++)
        {
            double[] reference = new double[10], actual = new double[10];
            for (int i = 0; i < 2000; i++) reference[(int)(random.Uniform() * 10)]++;
            for (int i = 0; i < 500; i++) actual[(int)(random.Uniform() * 10)]++;
            indices.Add(PopulationStability.Of(reference, actual));
        }
        Assert.Equal(PopulationStability.ByChance(10, 2000, 500), indices.Average(), 0.05 * indices.Average());
        Assert.InRange(indices.Count(x => x > PopulationStability.ByChance95(10, 2000, 500)) / 2000.0, 0.035, 0.065);
    }

    private static string Country(FixedStream random) => random.Uniform() switch { < 0.4 => "QX", < 0.7 => "VL", < 0.9 => "MR", _ => "TB" };

    private static EngineDefinition DefinitionOf() => Definitions.Of(
        new NumberFeature("amount", NumberScale.Standard), new CategoryFeature(["country"]), new TimeCycleFeature(LedgerRun.Day, "1d")) with
    {
        Health = new HealthOptions { Windows = [Day], Reference = new HealthReferenceOptions { LengthMicroseconds = 2 * LedgerRun.Day } },
    };

    private static EngineRun Run(List<string> records) => new EngineRun(DefinitionOf()).Take(records, 1000);

    private static DriftFigures DriftOf(List<string> records) => Run(records).Engine.Health().Windows[0].Drift!;

    /// <summary>Two labelled events a minute.</summary>
    private static List<string> Stream(ulong seed, int days, Func<FixedStream, int, (double Amount, string Country, bool IsMissing)> values)
    {
        var random = new FixedStream(seed);
        return [.. Enumerable.Range(0, days * 2880).Select(i =>
        {
            var (amount, country, isMissing) = values(random, i / 2880);
            return string.Create(
                CultureInfo.InvariantCulture,
                $"{{\"id\":\"e{i}\",\"time\":\"{DateTimeOffset.UnixEpoch.AddSeconds(30.0 * i):yyyy-MM-ddTHH:mm:ssZ}\"{(isMissing ? "" : $",\"amount\":{amount:F4}")},\"country\":\"{country}\",\"label\":{random.Label(0.1)}}}");
        })];
    }
}
