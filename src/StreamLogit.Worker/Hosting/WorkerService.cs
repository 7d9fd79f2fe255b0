using Microsoft.Extensions.Hosting;
using Microsoft.Extensions.Logging;
using StreamLogit.Pipeline;

namespace StreamLogit.Worker.Hosting;

/// <summary>The run of a stream as a service of the host: it stops with the host, and the host with it.</summary>
internal sealed class WorkerService(StreamRun run, RunPhase phase, TimeProvider time, IHostApplicationLifetime lifetime, ILogger<WorkerService> logger) : BackgroundService
{
    private static readonly TimeSpan ReportEvery = TimeSpan.FromMinutes(1);

    private string Stream => run.Engine.Definition.Stream;

    /// <inheritdoc/>
    protected override async Task ExecuteAsync(CancellationToken stoppingToken)
    {
        try
        {
            // The run begins when all has started, the server of the page too: what cannot listen must not have scored anything.
            await StartedAsync(stoppingToken);
            var health = run.Health;
            if (run.IsResumed) logger.GoesOn(Stream, health.Records, health.Labelled);
            else logger.Begins(Stream);
            if (run.BankChange is { IsNone: false } change)
                logger.BankChanged(Stream, change.Kept.Length, string.Join(", ", change.Started), string.Join(", ", change.Dropped));

            run.Rewound += reason => logger.GoesBack(Stream, reason);
            using var reports = time.CreateTimer(_ => Report(), null, ReportEvery, ReportEvery);
            phase.IsRunning = true;
            await run.RunAsync(stoppingToken);
            if (stoppingToken.IsCancellationRequested) logger.Stopped(Stream);
            else logger.Ended(Stream);
        }
        finally
        {
            phase.IsRunning = false;
            lifetime.StopApplication();
        }
    }

    private async Task StartedAsync(CancellationToken stoppingToken)
    {
        var started = new TaskCompletionSource(TaskCreationOptions.RunContinuationsAsynchronously);
        using var registration = lifetime.ApplicationStarted.Register(started.SetResult);
        await started.Task.WaitAsync(stoppingToken);
    }

    private void Report()
    {
        var health = run.Health;
        logger.Runs(Stream, run.Progress.Records, health.Awaiting, health.Rejected, health.Total.LogLoss, health.Total.BaseRateLogLoss);
    }
}
