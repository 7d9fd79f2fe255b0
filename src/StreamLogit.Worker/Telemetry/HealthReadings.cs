using System.Diagnostics.Metrics;
using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Telemetry;

/// <summary>Turns health into measurements with their attributes. What cannot be told is left out.</summary>
internal static class HealthReadings
{
    private static readonly double[] DelayShares = [0.5, 0.9, 0.99];

    public static IEnumerable<Measurement<long>> Rejects(HealthSnapshot health) =>
        health.RejectsByReason.Select(reject => new Measurement<long>(reject.Value, Tag("streamlogit.reject.reason", reject.Key)));

    public static IEnumerable<Measurement<long>> Changes(HealthSnapshot health) =>
        health.Detectors.Select(detector => new Measurement<long>(detector.Fired, Tag("streamlogit.detector", detector.Name)));

    public static IEnumerable<Measurement<long>> Notices((long Sent, long Failed) notices) =>
        [new(notices.Sent, Tag("streamlogit.webhook.outcome", "sent")), new(notices.Failed, Tag("streamlogit.webhook.outcome", "failed"))];

    public static IEnumerable<Measurement<long>> Alarms(HealthSnapshot health) =>
        health.Alarms.Select(alarm => new Measurement<long>(alarm.IsRaised ? 1 : 0, Tag("streamlogit.alarm", alarm.Alarm.Name)));

    public static IEnumerable<Measurement<double>> Windows(HealthSnapshot health, Func<HealthFigures, double> read) =>
        Finite(health.Windows.Select(window => (window.Name, window.Figures)).Prepend(("all", health.Total))
            .Select(window => new Measurement<double>(read(window.Item2), Tag("streamlogit.window", window.Item1))));

    public static IEnumerable<Measurement<double>> AlertRates(HealthSnapshot health) =>
        Finite(Streams(health).Select(window => new Measurement<double>(window.Stream.AlertRate, Tag("streamlogit.window", window.Name))));

    public static IEnumerable<Measurement<double>> Delays(HealthSnapshot health) =>
        Finite(Streams(health).SelectMany(window => DelayShares.Select(share => new Measurement<double>(
            window.Stream.LabelDelays.QuantileSeconds(share), Tag("streamlogit.window", window.Name), Tag("streamlogit.quantile", share)))));

    public static IEnumerable<Measurement<double>> LabelledShares(HealthSnapshot health) =>
        health.Cohorts.ByAge.Select(age => new Measurement<double>(age.Share, Tag("streamlogit.age.from", age.FromMicroseconds / 1_000_000)));

    public static IEnumerable<Measurement<double>> Settings(HealthSnapshot health, Func<SettingFigures, double> read) =>
        Finite(health.Settings.Select(setting => new Measurement<double>(read(setting), Tag("streamlogit.setting", setting.Name))));

    public static IEnumerable<Measurement<double>> Slices(HealthSnapshot health, Func<HealthFigures, double> read) =>
        Finite(health.Slices.Select(slice => new Measurement<double>(
            read(slice.Total), Tag("streamlogit.slice.field", slice.Field), Tag("streamlogit.slice.value", slice.Value ?? "(all others)"))));

    public static IEnumerable<Measurement<double>> Psi(HealthSnapshot health) =>
        health.Windows.LastOrDefault(window => window.Drift is not null)?.Drift is { } drift
            ? Finite(drift.Features.Select(feature => new Measurement<double>(feature.Psi, Tag("streamlogit.feature", feature.Feature))))
            : [];

    private static IEnumerable<(string Name, StreamFigures Stream)> Streams(HealthSnapshot health) =>
        health.Windows.Where(window => window.Stream is not null).Select(window => (window.Name, window.Stream!)).Prepend(("all", health.Stream));

    private static IEnumerable<Measurement<double>> Finite(IEnumerable<Measurement<double>> measurements) => measurements.Where(m => double.IsFinite(m.Value));

    private static KeyValuePair<string, object?> Tag(string name, object value) => new(name, value);
}
