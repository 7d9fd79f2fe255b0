namespace StreamLogit.Worker.Telemetry;

/// <summary>Which signals are exported by OTLP. Everything beyond that the exporter reads from the standard environment variables itself.</summary>
/// <param name="Metrics">Whether metrics are.</param>
/// <param name="Traces">Whether traces are.</param>
/// <param name="Logs">Whether logs are.</param>
internal sealed record TelemetryExport(bool Metrics, bool Traces, bool Logs)
{
    private const string Endpoint = "OTEL_EXPORTER_OTLP_ENDPOINT";

    /// <summary>
    /// Reads the variables of the OpenTelemetry specification: a signal is exported where an endpoint is set for all signals or for it alone, or where its exporter is named
    /// <c>otlp</c>; not where its exporter is named <c>none</c>, or where the SDK is disabled. With none of them set, nothing is exported.
    /// </summary>
    /// <exception cref="WrongInputException">A variable names an exporter that there is not.</exception>
    public static TelemetryExport Read(Func<string, string?> variable)
    {
        if (string.Equals(variable("OTEL_SDK_DISABLED"), "true", StringComparison.OrdinalIgnoreCase)) return new(false, false, false);
        return new(IsOn("METRICS"), IsOn("TRACES"), IsOn("LOGS"));

        bool IsOn(string signal)
        {
            string name = $"OTEL_{signal}_EXPORTER";
            string? exporter = variable(name)?.Trim();
            if (string.IsNullOrEmpty(exporter)) return IsSet(Endpoint) || IsSet($"OTEL_EXPORTER_OTLP_{signal}_ENDPOINT");
            return exporter switch
            {
                "otlp" => true,
                "none" => false,
                _ => throw new WrongInputException($"The environment variable {name} is '{exporter}': there are the exporters otlp and none."),
            };
        }

        bool IsSet(string name) => !string.IsNullOrWhiteSpace(variable(name));
    }
}
