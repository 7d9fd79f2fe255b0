using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class HealthSectionTests
{
    [Fact]
    public void Read_EveryKey_IsInTheDefinition()
    {
        var health = Definitions.ReadWith("""
            "health": {
              "windows": [ "1h", "1d" ], "lastLabels": 500, "slices": [ "channel", "shop.country" ], "sliceValues": 3,
              "history": { "minutes": "2h", "hours": "10d", "days": "1000d" },
              "reference": { "from": "2026-03-01T01:00:00+01:00", "length": "14d" },
              "labelsPerFalseAlarm": 50000, "detectAfterLabels": 0,
              "alarms": [
                { "metric": "logLossRatio", "window": "1d", "above": 1 },
                { "name": "slow app", "metric": "observedToExpected", "window": "1h", "below": -0.5, "minimum": 7, "for": "90s", "slice": { "channel": "app" } },
              ],
            }
            """).Engine.Health;

        Assert.Equal(["channel", "shop.country"], health.Slices);
        Assert.Equal((500, 3, 50_000L, 0L), (health.LastLabels, health.SliceValues, health.LabelsPerFalseAlarm, health.DetectAfterLabels));
        Assert.Equal(new HealthHistoryOptions { Minutes = 120, Hours = 240, Days = 1000 }, health.History);
        Assert.Equal(new DateTimeOffset(2026, 3, 1, 0, 0, 0, TimeSpan.Zero), DateTimeOffset.UnixEpoch.AddMicroseconds(health.Reference.FromMicroseconds!.Value));
        Assert.Equal(14L * 24 * 3600 * 1_000_000, health.Reference.LengthMicroseconds);
        Assert.Equal(
            [
                new AlarmOptions { Name = "logLossRatio over 1d above 1", Metric = AlarmMetric.LogLossRatio, Window = health.Windows[1], Bound = 1 },
                new AlarmOptions
                {
                    Name = "slow app", Metric = AlarmMetric.ObservedToExpected, Window = health.Windows[0], Bound = -0.5, IsAbove = false, Minimum = 7,
                    ForMicroseconds = 90_000_000, SliceField = "channel", SliceValue = "app",
                },
            ],
            health.Alarms);
    }

    [Fact]
    public void Read_AlarmOfTheSameName_IsRefused()
    {
        var error = Definitions.ErrorWith("""
            "health": { "alarms": [ { "metric": "auc", "window": "1d", "below": 0.6 }, { "metric": "auc", "window": "1d", "below": 0.6 } ] }
            """);
        Assert.Equal("the alarm \"auc over 1d below 0.6\" is already at health.alarms[0]: give it another name", error.Message);
    }
}
