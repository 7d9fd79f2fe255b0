using System.Globalization;
using StreamLogit.Benchmarks.Kafka;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>Prints a line per goal: its name, the value measured now, the goal, and whether it is met.</summary>
internal static class RatioTable
{
    private static readonly (string Name, Func<double> Measure, double Goal, bool IsUpperBound)[] Rows =
    [
        ("replay-label-in-event/token-pass", () => ReplayRatios.LabelsInEventsAgainstTokens(), 0.6, false),
        ("replay-late-labels/token-pass", () => ReplayRatios.LateLabelsAgainstTokens(), 0.6, false),
        ("replay-16-settings/replay-one-setting-time", () => ReplayRatios.SixteenSettingsAgainstOne(), 1.5, true),
        ("replay-allocated-bytes-per-event", () => ReplayRatios.AllocatedBytesPerEvent(), 0, true),
        ("engine-12-features-million-events-per-second", () => EngineRatios.MillionEventsPerSecond(settings: 1), 10, false),
        ("engine-16-settings-million-setting-updates-per-second", () => 16 * EngineRatios.MillionEventsPerSecond(settings: 16), 60, false),
        ("engine-allocated-bytes-per-event", () => EngineRatios.AllocatedBytesPerEvent(), 0, true),
        ("engine-with-health/without-time", () => HealthRatios.OnAgainstOff(eventsPerMinute: 6000), 1.1, true),
        ("engine-with-health/without-time, 20 events a minute", () => HealthRatios.OnAgainstOff(eventsPerMinute: 20), 1.1, true),
        ("engine-with-health/without-time, one slice", () => HealthRatios.OnAgainstOff(eventsPerMinute: 6000, "c0"), 1.2, true),
        ("engine-four-histories/none-time, 1 M keys", () => HistoryRatios.FourAgainstNone(), 1.6, true),
        ("engine-four-histories-allocated-bytes-per-event", () => HistoryRatios.AllocatedBytesPerEvent(), 0, true),
        ("engine-rows/scikit-learn-rows", () => EngineRatios.AgainstScikitLearn(settings: 1), 1.5, false),
        ("engine-16-setting-updates/scikit-learn-updates", () => EngineRatios.AgainstScikitLearn(settings: 16), 5, false),
        ("kafka-at-least-once/bare-loop", () => KafkaRatios.AtLeastOnceAgainstBareLoop(), 0.8, false),
        ("kafka-exactly-once-client/bare-loop-in-transactions", () => KafkaRatios.ExactlyOnceAgainstBareLoop(), 0.7, false),
    ];

    /// <summary>Measures the rows whose names contain one of <paramref name="names"/>, or all.</summary>
    /// <returns>0 if every goal is met, else 1.</returns>
    public static int Print(string[] names)
    {
        bool allMet = true;
        foreach (var (name, measure, goal, isUpperBound) in Rows)
        {
            if (names.Length > 0 && !names.Any(n => name.Contains(n, StringComparison.Ordinal))) continue;
            double value = measure();
            bool isMet = isUpperBound ? value <= goal : value >= goal;
            allMet &= isMet;
            Console.WriteLine(string.Create(
                CultureInfo.InvariantCulture, $"{name} {value:G4} {(isUpperBound ? "<=" : ">=")}{goal} {(isMet ? "ok" : "short")}"));
        }
        return allMet ? 0 : 1;
    }
}
