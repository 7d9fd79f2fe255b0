using System.Net.ServerSentEvents;
using System.Runtime.CompilerServices;
using Microsoft.Extensions.Hosting;
using StreamLogit.Pipeline;
using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Web;

/// <summary>
/// Once a second takes the snapshot that the engine published last, and wakes whoever follows. It only reads; the engine knows nothing of viewers, and one who is slow
/// misses frames instead of holding up anybody.
/// </summary>
internal sealed class HealthFeed(StreamRun run, TimeProvider time, IHostApplicationLifetime lifetime) : BackgroundService
{
    private static readonly TimeSpan FrameEvery = TimeSpan.FromSeconds(1);
    private static readonly TimeSpan BeatEvery = TimeSpan.FromSeconds(15);

    private volatile TaskCompletionSource _next = Signal();
    private volatile HealthFrame _frame = new(1, run.Engine.Definition, MomentOf(run, CoefficientTrail.Empty));

    /// <summary>The latest frame.</summary>
    public HealthFrame Frame => _frame;

    /// <summary>The views of a query as events: at once, whenever there is something new, and a beat now and then so that both sides see the connection is alive.</summary>
    public async IAsyncEnumerable<SseItem<byte[]>> FollowAsync(ViewQuery query, [EnumeratorCancellation] CancellationToken cancellation)
    {
        using var stop = CancellationTokenSource.CreateLinkedTokenSource(cancellation, lifetime.ApplicationStopping);
        long seen = 0;
        while (!stop.IsCancellationRequested)
        {
            var next = _next;
            var frame = _frame;
            if (frame.Number != seen)
            {
                seen = frame.Number;
                yield return new SseItem<byte[]>(frame.Json(query), "view");
            }
            bool isWoken = await WaitAsync(next.Task, stop.Token);
            if (!isWoken && !stop.IsCancellationRequested) yield return new SseItem<byte[]>("{}"u8.ToArray(), "beat");
        }
    }

    /// <inheritdoc/>
    protected override async Task ExecuteAsync(CancellationToken stoppingToken)
    {
        using var timer = new PeriodicTimer(FrameEvery, time);
        while (await timer.WaitForNextTickAsync(stoppingToken))
        {
            var moment = MomentOf(run, _frame.Moment.Coefficients);
            if (moment.IsSame(_frame.Moment)) continue;
            _frame = new HealthFrame(_frame.Number + 1, run.Engine.Definition, moment);
            Interlocked.Exchange(ref _next, Signal()).SetResult();
        }
    }

    private static HealthMoment MomentOf(StreamRun run, CoefficientTrail trail) => new(run.Health, run.Progress, run.RejectExamples, trail.With(run.Coefficients));

    private async Task<bool> WaitAsync(Task next, CancellationToken stop)
    {
        try
        {
            await next.WaitAsync(BeatEvery, time, stop);
            return true;
        }
        catch (Exception exception) when (exception is TimeoutException or OperationCanceledException)
        {
            return false;
        }
    }

    private static TaskCompletionSource Signal() => new(TaskCreationOptions.RunContinuationsAsynchronously);
}
