using System.Net;
using System.Net.Http.Headers;
using Microsoft.Extensions.Logging;
using Polly;
using Polly.Retry;
using Polly.Timeout;

namespace StreamLogit.Worker.Alarms;

/// <summary>Posts changes of alarms, signed, and tries again where the receiver cannot be reached, hangs or says that it is out of order.</summary>
internal sealed class WebhookSender : IDisposable
{
    private readonly WebhookTarget _target;
    private readonly TimeProvider _time;
    private readonly ILogger<WebhookSender> _logger;
    private readonly HttpClient _client;
    private readonly ResiliencePipeline<HttpResponseMessage> _pipeline;

    public WebhookSender(WebhookTarget target, WebhookPacing pacing, TimeProvider time, ILogger<WebhookSender> logger)
    {
        (_target, _time, _logger) = (target, time, logger);
        // A redirect could lead the signed message anywhere; a receiver that moved is a thing to be told.
        _client = new HttpClient(new SocketsHttpHandler { AllowAutoRedirect = false, UseCookies = false, PooledConnectionLifetime = TimeSpan.FromMinutes(2) })
        {
            Timeout = Timeout.InfiniteTimeSpan,
        };
        _pipeline = new ResiliencePipelineBuilder<HttpResponseMessage> { TimeProvider = time }
            .AddRetry(new RetryStrategyOptions<HttpResponseMessage>
            {
                ShouldHandle = new PredicateBuilder<HttpResponseMessage>().Handle<HttpRequestException>().Handle<TimeoutRejectedException>().HandleResult(IsPassing),
                BackoffType = DelayBackoffType.Exponential,
                UseJitter = true,
                Delay = pacing.FirstDelay,
                MaxDelay = pacing.LongestDelay,
                MaxRetryAttempts = pacing.Retries,
                OnRetry = SayRetry,
            })
            .AddTimeout(pacing.AttemptTimeout)
            .Build();
    }

    /// <summary>Sends a change.</summary>
    /// <returns>Whether the receiver has it; else it refused it for good or was out of reach for too long, which has been logged.</returns>
    public async Task<bool> SendAsync(AlarmNotice notice, CancellationToken cancellation)
    {
        byte[] body = notice.ToJson();
        try
        {
            using var response = await _pipeline.ExecuteAsync(async token => await PostAsync(notice.Id, body, token), cancellation);
            if (response.IsSuccessStatusCode) return true;
            _logger.NoticeRefused(notice.Change.Number, notice.Change.Name, (int)response.StatusCode);
        }
        catch (Exception exception) when (exception is HttpRequestException or TimeoutRejectedException)
        {
            _logger.NoticeGivenUp(notice.Change.Number, notice.Change.Name, Reason(exception));
        }
        return false;
    }

    /// <inheritdoc/>
    public void Dispose() => _client.Dispose();

    private async Task<HttpResponseMessage> PostAsync(string id, byte[] body, CancellationToken cancellation)
    {
        string timestamp = WebhookSignature.Timestamp(_time.GetUtcNow());
        using var request = new HttpRequestMessage(HttpMethod.Post, _target.Url) { Content = new ByteArrayContent(body) };
        request.Content.Headers.ContentType = new MediaTypeHeaderValue("application/json");
        request.Headers.Add(WebhookSignature.IdHeader, id);
        request.Headers.Add(WebhookSignature.TimestampHeader, timestamp);
        request.Headers.Add(WebhookSignature.Header, WebhookSignature.Of(_target.Secret, timestamp, body));
        // The answer itself is of no use, so it is not waited for.
        return await _client.SendAsync(request, HttpCompletionOption.ResponseHeadersRead, cancellation);
    }

    private static bool IsPassing(HttpResponseMessage response) =>
        response.StatusCode is HttpStatusCode.RequestTimeout or HttpStatusCode.TooManyRequests || (int)response.StatusCode >= 500;

    private ValueTask SayRetry(OnRetryArguments<HttpResponseMessage> retry)
    {
        string reason = retry.Outcome.Exception is { } exception ? Reason(exception) : $"it answered {(int)retry.Outcome.Result!.StatusCode}";
        retry.Outcome.Result?.Dispose();
        _logger.NoticeRetried(retry.AttemptNumber + 1, reason, retry.RetryDelay);
        return default;
    }

    private static string Reason(Exception exception) => exception is TimeoutRejectedException ? "it did not answer in time" : exception.Message;
}
