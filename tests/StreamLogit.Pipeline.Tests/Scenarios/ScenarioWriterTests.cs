using System.Security.Cryptography;
using StreamLogit.Pipeline.Scenarios;

namespace StreamLogit.Pipeline.Tests.Scenarios;

public sealed class ScenarioWriterTests
{
    private static readonly ScenarioOptions WithTruth = new() { Records = 60_000, Seed = 5, TruthField = "truth" };

    // Taken on x64 Linux; any platform must give the same.
    [Theory]
    [InlineData("ferry-tickets", 1, "3e3e87d7d6814cb1beba7dd3827739e7499bc6a9921250198ccb3b484c797d19")]
    [InlineData("ferry-tickets", 2, "c7e591787478a4b7942c0b9a72e37730b681216a38682054de3e39a8df194794")]
    [InlineData("pump-stations", 1, "dafd75de7c010419adffef02e80894dfb01dfd77405000f5e86458aea64359c6")]
    [InlineData("pump-stations", 2, "528c7a926db9d7785f857b474aeec21cb60c1843f07a8fd676f3d50d8b7c89ce")]
    public void Write_Seed_GivesTheseBytes(string scenario, int seed, string sha256)
    {
        byte[] bytes = ScenarioRecords.Bytes(scenario, new ScenarioOptions { Records = 20_000, Seed = seed });

        Assert.Equal(sha256, Convert.ToHexStringLower(SHA256.HashData(bytes)));
    }

    [Theory]
    [InlineData("ferry-tickets", 0)]
    [InlineData("ferry-tickets", 1)]
    [InlineData("pump-stations", 777)]
    public void Write_Records_GivesThatManyLines(string scenario, int records)
    {
        byte[] bytes = ScenarioRecords.Bytes(scenario, new ScenarioOptions { Records = records });

        Assert.Equal(records, bytes.Count(b => b == (byte)'\n'));
    }

    [Theory]
    [InlineData("ferry-tickets")]
    [InlineData("pump-stations")]
    public void Write_AnyStream_IsInTimeOrderWithEachLabelAfterItsEvent(string scenario)
    {
        var records = ScenarioRecords.Read(scenario, WithTruth);

        var seen = new HashSet<string>();
        var labelled = new HashSet<string>();
        string last = "";
        foreach (var record in records.All)
        {
            string time = record.GetProperty("time").GetString()!;
            Assert.Matches(@"^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$", time);
            Assert.True(string.CompareOrdinal(time, last) >= 0);
            last = time;
            string id = record.GetProperty("id").GetString()!;
            if (record.TryGetProperty("label", out _))
            {
                Assert.Contains(id, seen);
                Assert.True(labelled.Add(id));
            }
            else Assert.True(seen.Add(id));
        }
    }

    [Theory]
    [InlineData("ferry-tickets", 2.0, 30.0)]
    [InlineData("pump-stations", 1.0 / 24, 1.0)]
    public void Write_Labels_ComeWithinTheirDelay(string scenario, double leastDays, double mostDays)
    {
        var records = ScenarioRecords.Read(scenario, WithTruth);

        foreach (var scored in records.Events)
        {
            if (!records.Labels.TryGetValue(scored.GetProperty("id").GetString()!, out var label)) continue;
            double days = (label.GetProperty("time").GetDateTime() - scored.GetProperty("time").GetDateTime()).TotalDays;
            Assert.InRange(days, leastDays, mostDays);
        }
        double labelledShare = records.Labels.Count / (double)records.Events.Count;
        Assert.InRange(labelledShare, 0.95, 0.995);
    }

    [Theory]
    [InlineData("ferry-tickets", 0.006, 0.015)]
    [InlineData("pump-stations", 0.03, 0.09)]
    public void Write_TrueProbabilities_AreWhatTheLabelsWereDrawnFrom(string scenario, double leastRate, double mostRate)
    {
        var records = ScenarioRecords.Read(scenario, WithTruth);

        double expected = 0, variance = 0, logLoss = 0;
        int bad = 0;
        foreach (var scored in records.Events)
        {
            if (!records.Labels.TryGetValue(scored.GetProperty("id").GetString()!, out var label)) continue;
            double p = scored.GetProperty("truth").GetDouble();
            bool isBad = ScenarioRecords.IsBad(label);
            expected += p;
            variance += p * (1 - p);
            logLoss -= Math.Log(isBad ? p : 1 - p);
            if (isBad) bad++;
        }
        Assert.InRange(bad, expected - 4 * Math.Sqrt(variance), expected + 4 * Math.Sqrt(variance));
        Assert.InRange(bad / (double)records.Labels.Count, leastRate, mostRate);
        Assert.Equal(bad, records.Truth.Bad);
        Assert.Equal(records.Labels.Count, records.Truth.Labels);
        Assert.Equal(records.Events.Count, records.Truth.Events);
        // The field is rounded to six decimals.
        Assert.Equal(logLoss / records.Labels.Count, records.Truth.LogLoss, 1e-4);
        Assert.True(records.Truth.LogLoss < 0.6 * records.Truth.BaseRateLogLoss);
    }

    [Theory]
    [InlineData("ferry-tickets")]
    [InlineData("pump-stations")]
    public void Write_TruthField_ChangesNothingElse(string scenario)
    {
        var plain = ScenarioRecords.Read(scenario, new ScenarioOptions { Records = 2_000 });
        var told = ScenarioRecords.Read(scenario, new ScenarioOptions { Records = 2_000, TruthField = "truth" });

        for (int i = 0; i < plain.All.Count; i++)
        {
            var without = told.All[i].EnumerateObject().Where(p => p.Name != "truth").Select(p => p.ToString());
            Assert.Equal(plain.All[i].EnumerateObject().Select(p => p.ToString()), without);
        }
    }

    [Theory]
    [InlineData("ferry-tickets", 100, 3_600)]
    [InlineData("pump-stations", 288, 300)]
    public void Write_LongStream_KeepsFewLabelsWaiting(string scenario, int eventsPerDay, int mostWaiting)
    {
        var records = ScenarioRecords.Read(scenario, new ScenarioOptions { Records = 100_000, EventsPerDay = eventsPerDay });

        int waiting = 0, most = 0;
        foreach (var record in records.All)
        {
            string id = record.GetProperty("id").GetString()!;
            if (record.TryGetProperty("label", out _)) waiting--;
            else if (records.Labels.ContainsKey(id)) most = Math.Max(most, ++waiting);
        }
        Assert.InRange(most, 1, mostWaiting);
    }

    [Fact]
    public void Create_BeyondTheYear9999_SaysWhatToChange()
    {
        var exception = Assert.Throws<ArgumentException>(() =>
            ScenarioCatalog.Create("ferry-tickets", new ScenarioOptions { Records = 10_000_000, EventsPerDay = 1 }));

        Assert.Contains("more events per day", exception.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Write_Cancelled_Stops()
    {
        var writer = ScenarioCatalog.Create("pump-stations", new ScenarioOptions { Records = 1_000_000 });

        Assert.Throws<OperationCanceledException>(() => writer.Write(Stream.Null, cancellation: new CancellationToken(true)));
        Assert.InRange(writer.Truth.Events, 1, 2_000);
    }

    [Fact]
    public void Create_UnknownScenario_Throws() =>
        Assert.Throws<ArgumentException>(() => ScenarioCatalog.Create("tram-tickets", new ScenarioOptions()));

    [Theory]
    [InlineData("ferry-tickets")]
    [InlineData("pump-stations")]
    public void Create_TruthFieldThatEventsHave_Throws(string scenario)
    {
        var names = ScenarioRecords.Read(scenario, new ScenarioOptions { Records = 3_000 }).All
            .SelectMany(record => record.EnumerateObject()).Select(field => field.Name).Append("").Distinct();

        Assert.All(names, name =>
            Assert.Throws<ArgumentException>(() => ScenarioCatalog.Create(scenario, new ScenarioOptions { TruthField = name })));
    }

    [Theory]
    [InlineData(-1, null)]
    [InlineData(1, 0)]
    [InlineData(1, 86_400_001)]
    public void Create_OptionsOutOfRange_Throws(long records, int? eventsPerDay) =>
        Assert.ThrowsAny<ArgumentException>(() =>
            ScenarioCatalog.Create("ferry-tickets", new ScenarioOptions { Records = records, EventsPerDay = eventsPerDay }));
}
