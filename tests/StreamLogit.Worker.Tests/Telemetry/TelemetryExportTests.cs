using StreamLogit.Worker.Telemetry;

namespace StreamLogit.Worker.Tests.Telemetry;

public sealed class TelemetryExportTests
{
    [Theory]
    [InlineData("", false, false, false)]
    [InlineData("OTEL_SERVICE_NAME=a", false, false, false)]
    [InlineData("OTEL_EXPORTER_OTLP_ENDPOINT=http://c:4317", true, true, true)]
    [InlineData("OTEL_EXPORTER_OTLP_ENDPOINT=", false, false, false)]
    [InlineData("OTEL_EXPORTER_OTLP_METRICS_ENDPOINT=http://c:4317", true, false, false)]
    [InlineData("OTEL_EXPORTER_OTLP_TRACES_ENDPOINT=http://c:4317 OTEL_LOGS_EXPORTER=otlp", false, true, true)]
    [InlineData("OTEL_EXPORTER_OTLP_ENDPOINT=http://c:4317 OTEL_TRACES_EXPORTER=none", true, false, true)]
    [InlineData("OTEL_EXPORTER_OTLP_ENDPOINT=http://c:4317 OTEL_SDK_DISABLED=true", false, false, false)]
    public void Read_Variables_SayWhatIsExported(string variables, bool metrics, bool traces, bool logs) =>
        Assert.Equal(new TelemetryExport(metrics, traces, logs), TelemetryExport.Read(Variables(variables)));

    [Fact]
    public void Read_UnknownExporter_IsRefused() =>
        Assert.Contains("OTEL_METRICS_EXPORTER is 'prometheus'", Assert.Throws<WrongInputException>(() => TelemetryExport.Read(Variables("OTEL_METRICS_EXPORTER=prometheus"))).Message, StringComparison.Ordinal);

    private static Func<string, string?> Variables(string text)
    {
        var variables = text.Split(' ', StringSplitOptions.RemoveEmptyEntries).Select(pair => pair.Split('=', 2)).ToDictionary(pair => pair[0], pair => pair[1]);
        return name => variables.GetValueOrDefault(name);
    }
}
