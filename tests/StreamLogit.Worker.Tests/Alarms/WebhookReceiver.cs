using System.Collections.Concurrent;
using System.Globalization;
using System.Net;
using System.Net.Sockets;
using System.Text.Json;
using Microsoft.AspNetCore.Builder;
using Microsoft.AspNetCore.Hosting;
using Microsoft.AspNetCore.Http;
using StreamLogit.Worker.Alarms;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Alarms;

/// <summary>A receiver on this machine that answers as it is told, and checks every signature.</summary>
internal sealed class WebhookReceiver : IDisposable
{
    public const string Secret = "a-secret-that-both-sides-know";

    /// <summary>Instead of a status: no answer at all.</summary>
    public const int Hang = 0;

    private readonly WebApplication _server;
    private readonly CancellationTokenSource _end = new();
    private readonly ConcurrentQueue<int> _answers;
    private readonly int _lastAnswer;
    private readonly BlockingCollection<(string Id, JsonElement Body)> _received = [];

    /// <param name="answers">The statuses of the first answers; the last one goes on for ever.</param>
    public WebhookReceiver(params int[] answers)
        : this((ushort)FreePort(), answers)
    {
    }

    private WebhookReceiver(ushort port, int[] answers)
    {
        _answers = new ConcurrentQueue<int>(answers.SkipLast(1));
        _lastAnswer = answers[^1];
        Url = $"http://127.0.0.1:{port}/alarms";
        var builder = WebApplication.CreateEmptyBuilder(new WebApplicationOptions());
        builder.WebHost.UseKestrelCore().ConfigureKestrel(kestrel => kestrel.Listen(IPAddress.Loopback, port));
        _server = builder.Build();
        _server.Run(TakeAsync);
        Wait(_server.StartAsync());
    }

    /// <summary>A receiver on a port that was found free.</summary>
    public static WebhookReceiver On(int port, params int[] answers) => new((ushort)port, answers);

    public string Url { get; }

    /// <summary>Requests that came so far and were not looked at.</summary>
    public int Count => _received.Count;

    /// <summary>What was wrong with requests; empty if nothing was.</summary>
    public ConcurrentBag<string> Faults { get; } = [];

    public static int FreePort()
    {
        using var probe = new TcpListener(IPAddress.Loopback, 0);
        probe.Start();
        return ((IPEndPoint)probe.LocalEndpoint).Port;
    }

    /// <summary>Waits for the next request.</summary>
    public (string Id, JsonElement Body) Next() => _received.TryTake(out var request, StreamLogitProcess.Patience)
        ? request
        : throw new TimeoutException("The receiver got no further request.");

    public void Dispose()
    {
        _end.Cancel();
        Wait(_server.StopAsync());
        Wait(_server.DisposeAsync().AsTask());
        _end.Dispose();
    }

    private async Task TakeAsync(HttpContext context)
    {
        using var body = new MemoryStream();
        await context.Request.Body.CopyToAsync(body, context.RequestAborted);
        Check(context.Request, body.ToArray());
        int answer = _answers.TryDequeue(out int next) ? next : _lastAnswer;
        _received.Add((context.Request.Headers[WebhookSignature.IdHeader]!, JsonSerializer.Deserialize<JsonElement>(body.ToArray())));
        if (answer == Hang)
        {
            using var either = CancellationTokenSource.CreateLinkedTokenSource(context.RequestAborted, _end.Token);
            await Task.Delay(Timeout.Infinite, either.Token).ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
            return;
        }
        context.Response.StatusCode = answer;
        if (answer is >= 300 and < 400) context.Response.Headers.Location = Url;
    }

    private void Check(HttpRequest request, byte[] body)
    {
        string timestamp = request.Headers[WebhookSignature.TimestampHeader].ToString();
        if (request.Headers[WebhookSignature.Header] != WebhookSignature.Of(Secret, timestamp, body)) Faults.Add("wrong signature");
        if (request.ContentType != "application/json") Faults.Add($"content type {request.ContentType}");
        if (request.Method != "POST") Faults.Add($"method {request.Method}");
        long seconds = long.Parse(timestamp, CultureInfo.InvariantCulture);
        if (Math.Abs(DateTimeOffset.UtcNow.ToUnixTimeSeconds() - seconds) > StreamLogitProcess.Patience.TotalSeconds) Faults.Add($"timestamp {timestamp}");
    }

    private static void Wait(Task task)
    {
        if (!task.Wait(StreamLogitProcess.Patience)) throw new TimeoutException("The receiver did not start or stop.");
    }
}
