using System.Threading.Channels;
using Microsoft.Extensions.Hosting;
using Microsoft.Extensions.Logging;

namespace StreamLogit.Worker.Alarms;

/// <summary>Sends changes of alarms one after the other. Whoever hands them over never waits: there is room for some, and beyond it the oldest is dropped.</summary>
internal sealed class WebhookService : IHostedService, IDisposable
{
    private readonly WebhookSender _sender;
    private readonly WebhookPacing _pacing;
    private readonly SentMark _mark;
    private readonly ILogger<WebhookService> _logger;
    private readonly Channel<AlarmNotice> _queue;
    private readonly CancellationTokenSource _end;
    private Task _loop = Task.CompletedTask;
    private long _sent;
    private long _failed;

    public WebhookService(WebhookSender sender, WebhookPacing pacing, SentMark mark, TimeProvider time, ILogger<WebhookService> logger)
    {
        (_sender, _pacing, _mark, _logger) = (sender, pacing, mark, logger);
        _end = new CancellationTokenSource(Timeout.InfiniteTimeSpan, time);
        _queue = Channel.CreateBounded<AlarmNotice>(
            new BoundedChannelOptions(pacing.QueueLength) { FullMode = BoundedChannelFullMode.DropOldest, SingleReader = true },
            dropped =>
            {
                Interlocked.Increment(ref _failed);
                logger.NoticeDropped(dropped.Change.Number, dropped.Change.Name);
            });
    }

    /// <summary>Changes that the receiver has.</summary>
    public long Sent => Interlocked.Read(ref _sent);

    /// <summary>Changes that it will not have from this run: refused, given up or dropped.</summary>
    public long Failed => Interlocked.Read(ref _failed);

    /// <summary>Hands over a change. Returns at once.</summary>
    public void Post(AlarmNotice notice) => _queue.Writer.TryWrite(notice);

    /// <inheritdoc/>
    public Task StartAsync(CancellationToken cancellationToken)
    {
        _loop = Task.Run(LoopAsync, CancellationToken.None);
        return Task.CompletedTask;
    }

    /// <summary>Sends what waits, for a short time.</summary>
    public Task StopAsync(CancellationToken cancellationToken)
    {
        _queue.Writer.TryComplete();
        _end.CancelAfter(_pacing.Grace);
        return _loop;
    }

    /// <inheritdoc/>
    public void Dispose() => _end.Dispose();

    private async Task LoopAsync()
    {
        try
        {
            await foreach (var notice in _queue.Reader.ReadAllAsync(_end.Token)) await SendAsync(notice, _end.Token);
        }
        catch (OperationCanceledException)
        {
            _logger.NoticesLeft(_queue.Reader.Count + 1);
        }
    }

    private async Task SendAsync(AlarmNotice notice, CancellationToken cancellation)
    {
        if (!await _sender.SendAsync(notice, cancellation))
        {
            Interlocked.Increment(ref _failed);
            return;
        }
        Interlocked.Increment(ref _sent);
        try
        {
            _mark.Write(notice.Change.Number);
        }
        catch (Exception exception) when (exception is IOException or UnauthorizedAccessException)
        {
            // At worst the receiver gets this change once more. A disk that fails stops the stream itself, at its next commit.
            _logger.MarkNotWritten(exception.Message);
        }
    }
}
