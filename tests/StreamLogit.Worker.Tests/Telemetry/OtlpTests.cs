using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Telemetry;

public sealed class OtlpTests : IDisposable
{
    private readonly WorkerFolder _folder = new WorkerFolder().Demo();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Run_EndpointInTheEnvironment_SendsMetricsTracesAndLogs()
    {
        using var collector = new Collector();

        var result = Run(("OTEL_EXPORTER_OTLP_ENDPOINT", collector.Url), ("OTEL_EXPORTER_OTLP_PROTOCOL", "http/protobuf"), ("OTEL_SERVICE_NAME", "named-by-the-environment"));

        Assert.Equal(0, result.ExitCode);
        Assert.Equal(["/v1/logs", "/v1/metrics", "/v1/traces"], collector.Requests.Select(request => request.Path).Distinct().Order());
        AssertSent("/v1/metrics", "streamlogit.log_loss", "messaging.client.consumed.messages", "streamlogit.setting.weight", "named-by-the-environment", "pump-stations");
        AssertSent("/v1/traces", "process", "score", "write", "commit", "messaging.batch.message_count", "named-by-the-environment");
        AssertSent("/v1/logs", "the source has ended and all is committed", "named-by-the-environment");

        void AssertSent(string path, params string[] parts)
        {
            string text = string.Concat(collector.Requests.Where(request => request.Path == path).Select(request => request.Text));
            Assert.All(parts, part => Assert.Contains(part, text, StringComparison.Ordinal));
        }
    }

    [Fact]
    public void Run_EndpointOfOneSignal_SendsThatAlone()
    {
        using var collector = new Collector();

        var result = Run(("OTEL_EXPORTER_OTLP_METRICS_ENDPOINT", collector.Url + "/only"), ("OTEL_EXPORTER_OTLP_METRICS_PROTOCOL", "http/protobuf"), ("OTEL_EXPORTER_OTLP_PROTOCOL", "http/protobuf"));

        Assert.Equal(0, result.ExitCode);
        Assert.Equal(["/only"], collector.Requests.Select(request => request.Path).Distinct());
    }

    [Fact]
    public void Run_CollectorOutOfReach_ScoresAllTheSame()
    {
        int port = Alarms.WebhookReceiver.FreePort();

        var result = Run(("OTEL_EXPORTER_OTLP_ENDPOINT", $"http://127.0.0.1:{port}"), ("OTEL_EXPORTER_OTLP_PROTOCOL", "http/protobuf"));

        Assert.Equal(0, result.ExitCode);
        Assert.Equal("10080", result.Table("counted")[1][1]);
    }

    [Fact]
    public void Run_UnknownExporter_IsRefused()
    {
        var result = Run(("OTEL_TRACES_EXPORTER", "zipkin"));
        Assert.Equal(2, result.ExitCode);
        Assert.Contains("OTEL_TRACES_EXPORTER is 'zipkin'", result.Errors, StringComparison.Ordinal);
    }

    private ProgramResult Run(params (string, string)[] environment) => StreamLogitProcess.RunWith(environment, _folder.RunArguments(2000, "--until-end"));
}
