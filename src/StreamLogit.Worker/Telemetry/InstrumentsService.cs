using Microsoft.Extensions.Hosting;
using OpenTelemetry.Metrics;

namespace StreamLogit.Worker.Telemetry;

/// <summary>Has the instruments of the worker there while it runs, and exports what they say at its end.</summary>
/// <param name="instruments">The instruments.</param>
/// <param name="providers">The provider of metrics, if there is one.</param>
internal sealed class InstrumentsService(WorkerInstruments instruments, IEnumerable<MeterProvider> providers) : IHostedService
{
    private const int LongestFlushMilliseconds = 5000;

    /// <inheritdoc/>
    public Task StartAsync(CancellationToken cancellationToken) => Task.CompletedTask;

    /// <inheritdoc/>
    public Task StopAsync(CancellationToken cancellationToken)
    {
        foreach (var provider in providers) provider.ForceFlush(LongestFlushMilliseconds);
        instruments.Dispose();
        return Task.CompletedTask;
    }
}
