using System.Diagnostics;
using System.Diagnostics.Metrics;

namespace StreamLogit.Pipeline;

/// <summary>
/// What the loop measures of itself, batch by batch. Names are those of OpenTelemetry's conventions for messaging where there is one. Without a listener, nothing is measured.
/// </summary>
internal static class PipelineInstruments
{
    public const string Name = "StreamLogit.Pipeline";

    private static readonly InstrumentAdvice<double> Seconds = new()
    {
        HistogramBucketBoundaries = [0.0001, 0.00025, 0.0005, 0.001, 0.0025, 0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 5, 10, 30],
    };

    private static readonly Meter Meter = new(Name);

    public static ActivitySource Traces { get; } = new(Name);

    public static Counter<long> Consumed { get; } = Meter.CreateCounter<long>("messaging.client.consumed.messages", "{message}", "Records read from the source.");

    public static Counter<long> Sent { get; } = Meter.CreateCounter<long>("messaging.client.sent.messages", "{message}", "Scores, rejects and records written.");

    public static Histogram<double> Processing { get; } = Meter.CreateHistogram(
        "messaging.process.duration", "s", "How long the engine took for a batch of records.", advice: Seconds);

    public static Histogram<double> Operations { get; } = Meter.CreateHistogram(
        "messaging.client.operation.duration", "s", "How long it took to write what came of a batch (send), and to make it durable with the state (commit).", advice: Seconds);

    public static Histogram<double> Latency { get; } = Meter.CreateHistogram(
        "streamlogit.latency", "s", "How long a batch took from the end of its reading until its scores were written.", advice: Seconds);

    public static Histogram<int> BatchRecords { get; } = Meter.CreateHistogram(
        "streamlogit.batch.records", "{record}", "Records that travelled together.",
        advice: new InstrumentAdvice<int> { HistogramBucketBoundaries = [1, 2, 4, 8, 16, 32, 64, 128, 256, 512, 1024] });
}
