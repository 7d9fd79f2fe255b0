using Microsoft.Extensions.Diagnostics.HealthChecks;
using StreamLogit.Worker.Hosting;

namespace StreamLogit.Worker.Telemetry;

/// <summary>Ready from when the state is taken up and the stream runs, until it stops.</summary>
/// <param name="phase">Where the run stands.</param>
internal sealed class ReadyCheck(RunPhase phase) : IHealthCheck
{
    /// <inheritdoc/>
    public Task<HealthCheckResult> CheckHealthAsync(HealthCheckContext context, CancellationToken cancellationToken = default) =>
        Task.FromResult(phase.IsRunning ? HealthCheckResult.Healthy() : HealthCheckResult.Unhealthy("the stream does not run"));
}
