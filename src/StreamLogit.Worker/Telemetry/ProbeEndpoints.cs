using Microsoft.AspNetCore.Builder;
using Microsoft.AspNetCore.Diagnostics.HealthChecks;
using Microsoft.AspNetCore.Http;
using Microsoft.AspNetCore.Routing;

namespace StreamLogit.Worker.Telemetry;

/// <summary>The addresses for machines: is it alive, is it ready, what does it measure.</summary>
internal static class ProbeEndpoints
{
    /// <summary>The tag of checks that say whether the worker is alive, and the path without its slash.</summary>
    public const string Live = "live";

    /// <summary>The tag of checks that say whether it is ready, and the path without its slash.</summary>
    public const string Ready = "ready";

    /// <summary>Where the metrics are.</summary>
    public const string MetricsPath = "/metrics";

    /// <summary>
    /// Whether a path needs neither key nor known host name: those who ask whether a process is alive mostly have neither, and the answer is one word.
    /// </summary>
    public static bool IsProbe(PathString path) => path == "/" + Live || path == "/" + Ready;

    public static void Map(IEndpointRouteBuilder routes)
    {
        routes.MapHealthChecks("/" + Live, new HealthCheckOptions { Predicate = check => check.Tags.Contains(Live) });
        routes.MapHealthChecks("/" + Ready, new HealthCheckOptions { Predicate = check => check.Tags.Contains(Ready) });
        routes.MapPrometheusScrapingEndpoint(MetricsPath);
    }
}
