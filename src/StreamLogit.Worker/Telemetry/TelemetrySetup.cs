using System.Reflection;
using Microsoft.Extensions.DependencyInjection;
using OpenTelemetry.Exporter;
using OpenTelemetry.Logs;
using OpenTelemetry.Metrics;
using OpenTelemetry.Resources;
using OpenTelemetry.Trace;
using StreamLogit.Pipeline;
using StreamLogit.Worker.Alarms;
using StreamLogit.Worker.Hosting;

namespace StreamLogit.Worker.Telemetry;

/// <summary>Puts together what leaves the worker: metrics, traces and logs by OTLP, the scrape endpoint, liveness and readiness.</summary>
internal static class TelemetrySetup
{
    // All meters and sources of this program.
    private const string Own = "StreamLogit.*";
    private const string Runtime = "System.Runtime";

    public static void Add(IServiceCollection services, WorkerSetup setup)
    {
        services.AddHealthChecks()
            .AddCheck<LiveCheck>("stream", tags: [ProbeEndpoints.Live])
            .AddCheck<ReadyCheck>("run", tags: [ProbeEndpoints.Ready]);
        bool isScraped = setup.Page is not null;
        var export = setup.Export;
        if (!isScraped && export is { Metrics: false, Traces: false, Logs: false }) return;

        services.AddSingleton(provider =>
        {
            var run = provider.GetRequiredService<StreamRun>();
            var webhook = provider.GetService<WebhookService>();
            return new WorkerInstruments(
                () => run.Health, () => run.Progress, webhook is null ? null : () => (webhook.Sent, webhook.Failed), provider.GetRequiredService<TimeProvider>());
        });
        // Nobody asks for the instruments, which are there to be listened to.
        services.AddHostedService<InstrumentsService>();
        var telemetry = services.AddOpenTelemetry().ConfigureResource(resource => Describe(resource, setup.Definition.Engine.Stream));
        if (isScraped || export.Metrics)
        {
            telemetry.WithMetrics(metrics =>
            {
                metrics.AddMeter(Own).AddMeter(Runtime);
                if (isScraped) metrics.AddPrometheusExporter();
                if (export.Metrics) metrics.AddOtlpExporter(options => Configure(options, "METRICS"));
            });
        }
        if (export.Traces) telemetry.WithTracing(traces => traces.AddSource(Own).AddOtlpExporter(options => Configure(options, "TRACES")));
        if (export.Logs) telemetry.WithLogging(logs => logs.AddOtlpExporter(options => Configure(options, "LOGS")), options => options.IncludeFormattedMessage = true);
    }

    private static void Configure(OtlpExporterOptions options, string signal) => OtlpSignal.Configure(options, signal, Environment.GetEnvironmentVariable);

    // The variables of the environment have the last word.
    private static void Describe(ResourceBuilder resource, string stream)
    {
        string? version = typeof(TelemetrySetup).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion;
        resource.Clear()
            .AddService("streamlogit", serviceVersion: version, autoGenerateServiceInstanceId: false)
            .AddAttributes([new("streamlogit.stream", stream)])
            .AddTelemetrySdk()
            .AddEnvironmentVariableDetector();
    }
}
