using Microsoft.Extensions.Diagnostics.HealthChecks;
using StreamLogit.Pipeline;

namespace StreamLogit.Worker.Telemetry;

/// <summary>Alive as long as batches come through. One that is under way for long hangs on a disk, a broker or a fault; most outages of a broker are over before.</summary>
/// <param name="standstill">For how long batches have been under way without one coming through.</param>
internal sealed class LiveCheck(Func<TimeSpan> standstill) : IHealthCheck
{
    /// <summary>How long batches may stand still.</summary>
    public static readonly TimeSpan Longest = TimeSpan.FromMinutes(10);

    public LiveCheck(StreamRun run)
        : this(() => run.Standstill)
    {
    }

    /// <inheritdoc/>
    public Task<HealthCheckResult> CheckHealthAsync(HealthCheckContext context, CancellationToken cancellationToken = default) =>
        Task.FromResult(standstill() <= Longest ? HealthCheckResult.Healthy() : HealthCheckResult.Unhealthy("no batch has come through for minutes"));
}
