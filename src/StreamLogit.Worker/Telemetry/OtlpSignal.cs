using System.Globalization;
using OpenTelemetry.Exporter;

namespace StreamLogit.Worker.Telemetry;

/// <summary>Reads the variables that are about one signal alone, which take precedence over those for all; the exporter itself reads only the latter.</summary>
internal static class OtlpSignal
{
    /// <param name="options">What the exporter has read.</param>
    /// <param name="signal"><c>METRICS</c>, <c>TRACES</c> or <c>LOGS</c>.</param>
    /// <param name="variable">Reads an environment variable.</param>
    /// <exception cref="WrongInputException">A variable holds what it cannot.</exception>
    public static void Configure(OtlpExporterOptions options, string signal, Func<string, string?> variable)
    {
        if (Read("PROTOCOL") is { } protocol)
        {
            options.Protocol = protocol switch
            {
                "grpc" => OtlpExportProtocol.Grpc,
                "http/protobuf" => OtlpExportProtocol.HttpProtobuf,
                _ => throw Wrong("PROTOCOL", protocol, "grpc or http/protobuf"),
            };
        }
        if (Read("ENDPOINT") is { } endpoint)
            options.Endpoint = Uri.TryCreate(endpoint, UriKind.Absolute, out var url) ? url : throw Wrong("ENDPOINT", endpoint, "an address as http://127.0.0.1:4317");
        if (Read("HEADERS") is { } headers) options.Headers = headers;
        if (Read("TIMEOUT") is { } timeout)
        {
            options.TimeoutMilliseconds = int.TryParse(timeout, NumberStyles.None, CultureInfo.InvariantCulture, out int milliseconds)
                ? milliseconds
                : throw Wrong("TIMEOUT", timeout, "a whole number of milliseconds");
        }

        string? Read(string what) => variable($"OTEL_EXPORTER_OTLP_{signal}_{what}") is { } value && !string.IsNullOrWhiteSpace(value) ? value.Trim() : null;

        WrongInputException Wrong(string what, string value, string expected) =>
            new($"The environment variable OTEL_EXPORTER_OTLP_{signal}_{what} is '{value}'; expected {expected}.");
    }
}
