using System.Diagnostics.Metrics;
using StreamLogit.Engine.Health;
using StreamLogit.Pipeline;

namespace StreamLogit.Worker.Telemetry;

/// <summary>What a worker tells of its stream: read from the health that the engine published last, whenever somebody asks. It costs the stream nothing.</summary>
internal sealed class WorkerInstruments : IDisposable
{
    public const string Name = "StreamLogit.Worker";

    private readonly Meter _meter = new(Name);
    private readonly Func<HealthSnapshot> _health;

    /// <param name="health">The health published last.</param>
    /// <param name="progress">How far the run has come.</param>
    /// <param name="notices">Changes of alarms that the webhook has sent and failed to send, or null without a webhook.</param>
    /// <param name="time">The clock that the stream's is compared with.</param>
    public WorkerInstruments(Func<HealthSnapshot> health, Func<LoopProgress> progress, Func<(long Sent, long Failed)>? notices, TimeProvider time)
    {
        _health = health;
        Count("streamlogit.records", "{record}", "Records taken, of every kind.", h => h.Records);
        Count("streamlogit.events", "{event}", "Events scored.", h => h.Events);
        Count("streamlogit.alerts", "{event}", "Events whose decision was alert.", h => h.Stream.Alerts);
        Count("streamlogit.labels", "{label}", "Labels learned.", h => h.Labelled);
        Count("streamlogit.labels.repeated", "{label}", "Labels that came again and said the same.", h => h.Repeated);
        Count("streamlogit.labels.corrected", "{label}", "Labels that replaced their opposite.", h => h.Corrected);
        Count("streamlogit.events.expired", "{event}", "Events whose wait ended without a label.", h => h.Expired);
        Count("streamlogit.events.thinned", "{event}", "Events that were not kept for their label.", h => h.Thinned);
        _meter.CreateObservableCounter("streamlogit.rejects", () => Each(HealthReadings.Rejects), "{record}", "Records rejected.");
        _meter.CreateObservableCounter("streamlogit.changes", () => Each(HealthReadings.Changes), "{change}", "Changes that a detector found.");
        _meter.CreateObservableCounter("streamlogit.commits", () => progress().Commits, "{commit}", "Commits of this run.");
        if (notices is not null) _meter.CreateObservableCounter("streamlogit.webhook.notices", () => HealthReadings.Notices(notices()), "{notice}", "Changes of alarms that the webhook was given.");

        Level("streamlogit.events.awaiting", "{event}", "Events scored whose label is not known yet.", h => h.Awaiting);
        Level("streamlogit.events.awaiting.memory", "By", "Memory that the kept events take.", h => h.AwaitingBytes);
        Level("streamlogit.labels.early", "{label}", "Labels that came before their event and wait for it.", h => h.Early);
        _meter.CreateObservableUpDownCounter("streamlogit.source.unread", () => Unread(progress()), "By", "What the source still holds; not told where nobody knows.");
        _meter.CreateObservableGauge("streamlogit.source.lag", () => Lag(time.GetUtcNow()), "s", "How far the stream's clock is behind the worker's.");

        Window("streamlogit.window.labels", "{label}", "Labels in the window.", f => f.Count);
        Window("streamlogit.log_loss", "{nat}", "Mean log-loss of the published probabilities.", f => f.LogLoss);
        Window("streamlogit.log_loss.base_rate", "{nat}", "Mean log-loss of the base rate.", f => f.BaseRateLogLoss);
        Window("streamlogit.brier", "1", "Brier score.", f => f.Brier);
        Window("streamlogit.probability", "1", "Mean published probability of labelled events.", f => f.MeanProbability);
        Window("streamlogit.label_rate", "1", "Share of labels that are 1.", f => f.ObservedRate);
        Window("streamlogit.observed_to_expected", "1", "Bad outcomes that came over those that were promised.", f => f.Promised.ObservedToExpected);
        Window("streamlogit.spiegelhalter_z", "1", "Spiegelhalter's Z.", f => f.Spiegelhalter.Z);
        Window("streamlogit.calibration.intercept", "1", "Calibration intercept.", f => f.Scores.Calibration.Intercept);
        Window("streamlogit.calibration.slope", "1", "Calibration slope.", f => f.Scores.Calibration.Slope);
        Window("streamlogit.calibration.error", "1", "Expected calibration error over ten groups of equal counts.", f => f.Scores.CalibrationError.Expected);
        Window("streamlogit.auc", "1", "Area under the receiver operating characteristic.", f => f.Scores.RocArea.Area);
        Window("streamlogit.precision", "1", "Share of alerts whose label is 1.", f => f.Alerts.Precision);
        Window("streamlogit.recall", "1", "Share of labels 1 whose event was an alert.", f => f.Alerts.Recall);
        _meter.CreateObservableGauge("streamlogit.alert_rate", () => Each(HealthReadings.AlertRates), "1", "Share of events that are alerts.");
        _meter.CreateObservableGauge("streamlogit.label.delay", () => Each(HealthReadings.Delays), "s", "How long labels that came after their event took: quantiles.");
        _meter.CreateObservableGauge("streamlogit.labelled_share", () => Each(HealthReadings.LabelledShares), "1", "Share of events of an age whose label is known.");
        _meter.CreateObservableGauge("streamlogit.setting.log_loss", () => Each(h => HealthReadings.Settings(h, s => s.LogLoss)), "{nat}", "Mean log-loss of a setting of the bank.");
        _meter.CreateObservableGauge("streamlogit.setting.weight", () => Each(h => HealthReadings.Settings(h, s => s.BlendWeight)), "1", "Weight of a setting in the blend.");
        _meter.CreateObservableGauge("streamlogit.slice.log_loss", () => Each(h => HealthReadings.Slices(h, f => f.LogLoss)), "{nat}", "Mean log-loss of a slice.");
        _meter.CreateObservableGauge(
            "streamlogit.slice.observed_to_expected", () => Each(h => HealthReadings.Slices(h, f => f.Promised.ObservedToExpected)), "1",
            "Bad outcomes of a slice that came over those that were promised.");
        _meter.CreateObservableGauge("streamlogit.drift.psi", () => Each(HealthReadings.Psi), "{nat}", "Population stability index of a feature over the longest window.");
        _meter.CreateObservableGauge("streamlogit.alarm.raised", () => Each(HealthReadings.Alarms), "1", "1 while the alarm is raised, else 0.");
    }

    /// <inheritdoc/>
    public void Dispose() => _meter.Dispose();

    private void Count(string name, string unit, string description, Func<HealthSnapshot, long> read) =>
        _meter.CreateObservableCounter(name, () => read(_health()), unit, description);

    private void Level(string name, string unit, string description, Func<HealthSnapshot, long> read) =>
        _meter.CreateObservableUpDownCounter(name, () => read(_health()), unit, description);

    private void Window(string name, string unit, string description, Func<HealthFigures, double> read) =>
        _meter.CreateObservableGauge(name, () => Each(h => HealthReadings.Windows(h, read)), unit, description);

    private IEnumerable<Measurement<T>> Each<T>(Func<HealthSnapshot, IEnumerable<Measurement<T>>> read) where T : struct => read(_health());

    private static IEnumerable<Measurement<long>> Unread(LoopProgress progress) =>
        progress.Source.TotalBytes is { } total ? [new(Math.Max(0, total - progress.Source.Bytes))] : [];

    private IEnumerable<Measurement<double>> Lag(DateTimeOffset now) =>
        _health().ClockMicroseconds is { } clock ? [new((now - DateTimeOffset.UnixEpoch.AddMicroseconds(clock)).TotalSeconds)] : [];
}
