using System.Text.Json;
using StreamLogit.Pipeline.Scenarios;

namespace StreamLogit.Pipeline.Tests.Scenarios;

public sealed class FerryTicketsTests
{
    private static readonly ScenarioRecords Records =
        ScenarioRecords.Read("ferry-tickets", new ScenarioOptions { Records = 60_000, Seed = 5, TruthField = "truth" });

    [Fact]
    public void Change_Midway_MakesGiftTicketsTheNewFraud()
    {
        int midway = Records.All.Count / 2;
        var gifts = Records.All.Select((record, index) => (record, index))
            .Where(e => e.record.TryGetProperty("gift", out var gift) && gift.GetBoolean()).ToList();

        double before = gifts.Where(g => g.index < midway).Average(g => Truth(g.record));
        double after = gifts.Where(g => g.index >= midway).Average(g => Truth(g.record));

        Assert.InRange(before, 0, 0.03);
        Assert.InRange(after, 0.08, 0.5);
    }

    [Fact]
    public void Fields_Countries_BelongToTheCardAndAreNotReal()
    {
        var countries = Records.Events.GroupBy(e => Text(e, "card")).Select(g => g.Select(e => Text(e, "country")).Distinct().ToList()).ToList();

        Assert.All(countries, c => Assert.Single(c));
        Assert.Equal(["QT", "QV", "QW", "QX", "QY", "QZ"], countries.Select(c => c[0]).Distinct().Order());
    }

    [Fact]
    public void Fields_Cards_AreUsedAgainSoonMoreOftenThanByChance()
    {
        var cards = Records.Events.Select(e => Text(e, "card")).ToArray();

        int soon = Enumerable.Range(16, cards.Length - 16).Count(i => cards.AsSpan(i - 16, 16).Contains(cards[i]));
        Assert.InRange(soon / (double)cards.Length, 0.05, 0.12);
    }

    [Fact]
    public void Fields_Numbers_StayInTheirRanges() => Assert.All(Records.Events, e =>
    {
        Assert.InRange(e.GetProperty("price").GetDouble(), 1, 1500);
        Assert.InRange(e.GetProperty("passengers").GetInt32(), 1, 9);
        Assert.InRange(e.GetProperty("daysAhead").GetInt32(), 0, 120);
    });

    [Fact]
    public void Times_DayAndWeek_HaveTheirRhythm()
    {
        var times = Records.Events.Select(e => e.GetProperty("time").GetDateTime().ToUniversalTime()).ToList();

        Assert.True(times.Count(t => t.Hour is >= 8 and < 20) > 5 * times.Count(t => t.Hour is < 6 or >= 23));
        Assert.True(times.Count(t => t.DayOfWeek == DayOfWeek.Friday) > 1.4 * times.Count(t => t.DayOfWeek == DayOfWeek.Tuesday));
    }

    private static double Truth(JsonElement record) => record.GetProperty("truth").GetDouble();

    private static string Text(JsonElement record, string name) => record.GetProperty(name).GetString()!;
}
