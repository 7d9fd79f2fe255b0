using System.Text.Json;
using StreamLogit.Pipeline.Scenarios;

namespace StreamLogit.Pipeline.Tests.Scenarios;

public sealed class PumpStationsTests
{
    private static readonly ScenarioRecords Records =
        ScenarioRecords.Read("pump-stations", new ScenarioOptions { Records = 60_000, Seed = 5, TruthField = "truth" });

    [Fact]
    public void Change_Midway_ReplacesOneVibrationSensor()
    {
        int midway = Records.All.Count / 2;
        double[] rise = [.. Enumerable.Range(1, 12).Select(pump => MeanVibration(pump, midway, int.MaxValue) - MeanVibration(pump, 0, midway))];

        Assert.InRange(rise[4], 1.5, 3);
        Assert.All(rise.Where((_, pump) => pump != 4), r => Assert.InRange(r, -0.5, 0.5));
    }

    [Fact]
    public void Fields_SomeValues_AreNullOrAbsent()
    {
        Assert.InRange(Share(e => e.GetProperty("flow").ValueKind == JsonValueKind.Null), 0.012, 0.018);
        Assert.InRange(Share(e => !e.TryGetProperty("pressure", out _)), 0.003, 0.007);
        Assert.InRange(Share(e => e.GetProperty("bearing").GetProperty("vibration").ValueKind == JsonValueKind.Null), 0.003, 0.007);
        Assert.InRange(Share(e => !e.GetProperty("bearing").TryGetProperty("temperature", out _)), 0.007, 0.013);
    }

    [Fact]
    public void Wear_OverWeeks_RaisesTheTruthAndFallsWhenTheBearingIsRenewed()
    {
        var daily = Records.Events.Where(e => e.GetProperty("pump").GetInt32() == 1)
            .GroupBy(e => e.GetProperty("time").GetDateTime().Date).Select(g => g.Average(e => e.GetProperty("truth").GetDouble())).ToList();

        int renewals = daily.Zip(daily.Skip(1)).Count(pair => pair.First > 0.08 && pair.Second < 0.02);
        // 104 days hold two to six lives of 16 to 40 days.
        Assert.InRange(renewals, 2, 6);
    }

    private static double Share(Func<JsonElement, bool> condition) => Records.Events.Count(condition) / (double)Records.Events.Count;

    private static double MeanVibration(int pump, int from, int to) => Records.All.Take(to).Skip(from)
        .Where(e => e.TryGetProperty("pump", out var number) && number.GetInt32() == pump)
        .Select(e => e.GetProperty("bearing").GetProperty("vibration"))
        .Where(v => v.ValueKind == JsonValueKind.Number).Average(v => v.GetDouble());
}
