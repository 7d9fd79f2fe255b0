using Microsoft.Extensions.Hosting;
using Microsoft.Extensions.Logging;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Alarms;

namespace StreamLogit.Worker.Alarms;

/// <summary>Tells changes of alarms as they appear in the health that the engine publishes: to the log, and to the webhook where there is one. It only reads.</summary>
/// <param name="stream">The stream.</param>
/// <param name="health">The health published last.</param>
/// <param name="isResumed">Whether the run goes on from an earlier one.</param>
/// <param name="webhook">The webhook, or null.</param>
/// <param name="mark">What the webhook has sent.</param>
/// <param name="time">The clock of looking.</param>
/// <param name="logger">The log.</param>
internal sealed class AlarmService(
    string stream, Func<HealthSnapshot> health, bool isResumed, WebhookService? webhook, SentMark mark, TimeProvider time, ILogger<AlarmService> logger) : BackgroundService
{
    private static readonly TimeSpan LookEvery = TimeSpan.FromMilliseconds(250);

    private long _told;

    /// <inheritdoc/>
    public override Task StartAsync(CancellationToken cancellationToken)
    {
        // Before the stream runs: what is in the health now comes from earlier runs.
        var first = health();
        _told = LastNumber(first);
        if (webhook is not null) PostLeftBehind(first, webhook);
        return base.StartAsync(cancellationToken);
    }

    /// <inheritdoc/>
    public override async Task StopAsync(CancellationToken cancellationToken)
    {
        await base.StopAsync(cancellationToken);
        // The stream has ended by now; what it brought last is told too.
        Look();
    }

    /// <inheritdoc/>
    protected override async Task ExecuteAsync(CancellationToken stoppingToken)
    {
        using var timer = new PeriodicTimer(LookEvery, time);
        try
        {
            while (await timer.WaitForNextTickAsync(stoppingToken)) Look();
        }
        catch (OperationCanceledException)
        {
            // The last look is at the stop.
        }
    }

    private void Look()
    {
        foreach (var change in NewChanges(health().AlarmChanges))
        {
            if (change.Number > _told + 1) logger.ChangesPassed(stream, change.Number - _told - 1);
            _told = change.Number;
            if (change.IsRaised) logger.AlarmRaised(stream, change.Name, change.Sentence);
            else logger.AlarmQuiet(stream, change.Name, change.Sentence);
            webhook?.Post(new AlarmNotice(stream, change));
        }
    }

    private List<AlarmChange> NewChanges(IEnumerable<AlarmChange> latestFirst) => [.. latestFirst.TakeWhile(change => change.Number > _told).Reverse()];

    /// <summary>Hands over what earlier runs found and did not send. Where nobody knows what was sent, nothing is.</summary>
    private void PostLeftBehind(HealthSnapshot first, WebhookService target)
    {
        if (!isResumed || mark.Read() is not { } sent)
        {
            mark.Write(_told);
            return;
        }
        foreach (var change in first.AlarmChanges.TakeWhile(change => change.Number > sent).Reverse()) target.Post(new AlarmNotice(stream, change));
    }

    private static long LastNumber(HealthSnapshot snapshot) => snapshot.AlarmChanges.IsEmpty ? 0 : snapshot.AlarmChanges[0].Number;
}
