using Microsoft.Extensions.Diagnostics.HealthChecks;
using StreamLogit.Worker.Hosting;
using StreamLogit.Worker.Telemetry;

namespace StreamLogit.Worker.Tests.Telemetry;

public sealed class ProbeCheckTests
{
    [Theory]
    [InlineData(0, HealthStatus.Healthy)]
    [InlineData(599, HealthStatus.Healthy)]
    [InlineData(601, HealthStatus.Unhealthy)]
    public async Task Live_Standstill_DecidesIt(int seconds, HealthStatus expected)
    {
        var check = new LiveCheck(() => TimeSpan.FromSeconds(seconds));
        Assert.Equal(expected, (await check.CheckHealthAsync(new HealthCheckContext(), TestContext.Current.CancellationToken)).Status);
    }

    [Fact]
    public async Task Ready_FollowsTheRun()
    {
        var phase = new RunPhase();
        var check = new ReadyCheck(phase);
        Assert.Equal(HealthStatus.Unhealthy, (await check.CheckHealthAsync(new HealthCheckContext(), TestContext.Current.CancellationToken)).Status);
        phase.IsRunning = true;
        Assert.Equal(HealthStatus.Healthy, (await check.CheckHealthAsync(new HealthCheckContext(), TestContext.Current.CancellationToken)).Status);
    }
}
