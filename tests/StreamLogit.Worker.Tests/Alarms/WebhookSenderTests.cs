using Microsoft.Extensions.Logging;
using StreamLogit.Engine.Health.Alarms;
using StreamLogit.Pipeline.Options;
using StreamLogit.Worker.Alarms;

namespace StreamLogit.Worker.Tests.Alarms;

public sealed class WebhookSenderTests : IDisposable
{
    private static readonly WebhookPacing Quick = new()
    {
        AttemptTimeout = TimeSpan.FromMilliseconds(500), FirstDelay = TimeSpan.FromMilliseconds(1), LongestDelay = TimeSpan.FromMilliseconds(5), Retries = 4,
    };

    private static readonly AlarmNotice Notice = new(
        "quay/tickets", new AlarmChange(7, "too many \"bad\"", 1_767_225_600_000_000, IsRaised: true, 1.75, "Bad outcomes that came for each one promised over 1d is 1.75, above 1.5."));

    private readonly TemporaryFolder _folder = new();
    private readonly LogLines<WebhookSender> _log = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Send_ReceiverTakesIt_IsSentOnceWithItsNumbers()
    {
        using var receiver = new WebhookReceiver(204);

        Assert.True(await SendAsync(receiver.Url));

        var (id, body) = receiver.Next();
        Assert.Equal("quay%2Ftickets/7", id);
        Assert.Equal(
            """{"stream":"quay/tickets","number":7,"alarm":"too many \"bad\"","state":"raised","at":"2026-01-01T00:00:00Z","value":1.75,"sentence":"Bad outcomes that came for each one promised over 1d is 1.75, above 1.5."}""",
            body.GetRawText());
        Assert.Equal(0, receiver.Count);
        Assert.Empty(receiver.Faults);
        Assert.Empty(_log.Lines);
    }

    [Theory]
    [InlineData(500, 503)]
    [InlineData(429, 408)]
    [InlineData(WebhookReceiver.Hang, WebhookReceiver.Hang)]
    public async Task Send_ReceiverIsOutOfOrderForAWhile_IsSentAgainUntilItIsTaken(int first, int second)
    {
        using var receiver = new WebhookReceiver(first, second, 200);

        Assert.True(await SendAsync(receiver.Url));

        Assert.Equal(3, receiver.Count);
        Assert.Empty(receiver.Faults); // each attempt has its own timestamp and signature
        Assert.Single(Enumerable.Range(0, 3).Select(_ => receiver.Next().Id).Distinct());
        Assert.Equal(2, _log.Lines.Count(line => line.Level == LogLevel.Warning));
    }

    [Fact]
    public async Task Send_NobodyListensAtFirst_IsSentWhenSomebodyDoes()
    {
        int port = WebhookReceiver.FreePort();
        var pacing = Quick with { Retries = 200, LongestDelay = TimeSpan.FromMilliseconds(50) };
        var sending = SendAsync($"http://127.0.0.1:{port}/alarms", pacing);
        Assert.True(SpinWait.SpinUntil(() => !_log.Lines.IsEmpty, Running.StreamLogitProcess.Patience), "no attempt failed");

        using var receiver = WebhookReceiver.On(port, 200);

        Assert.True(await sending.WaitAsync(Running.StreamLogitProcess.Patience, TestContext.Current.CancellationToken));
        Assert.Equal(1, receiver.Count);
    }

    [Theory]
    [InlineData(400)]
    [InlineData(401)]
    [InlineData(302)]
    public async Task Send_ReceiverRefuses_IsNotSentAgainAndSaysSo(int status)
    {
        using var receiver = new WebhookReceiver(status);

        Assert.False(await SendAsync(receiver.Url));

        Assert.Equal(1, receiver.Count);
        var (level, text) = Assert.Single(_log.Lines);
        Assert.Equal(LogLevel.Error, level);
        Assert.Contains($"with status {status}", text, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Send_ReceiverStaysOutOfOrder_IsGivenUpAndSaysSo()
    {
        int port = WebhookReceiver.FreePort();

        Assert.False(await SendAsync($"http://127.0.0.1:{port}/alarms"));

        Assert.Equal(Quick.Retries, _log.Lines.Count(line => line.Level == LogLevel.Warning));
        Assert.Contains("out of order for too long", _log.Lines.Last().Text, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Send_AnyOutcome_TheSecretIsInNoLog()
    {
        using var receiver = new WebhookReceiver(500, 200, 400);

        await SendAsync(receiver.Url);
        await SendAsync(receiver.Url);

        Assert.NotEmpty(_log.Lines);
        Assert.All(_log.Lines, line => Assert.DoesNotContain(WebhookReceiver.Secret, line.Text, StringComparison.Ordinal));
    }

    [Theory]
    [InlineData("short")]
    [InlineData("with blanks in it, though long")]
    public void Read_SecretThatProtectsNothing_IsRefusedWithoutSayingIt(string secret)
    {
        var options = new WebhookOptions(new Uri("http://127.0.0.1:1")) { SecretFile = _folder.Write("secret", secret) };

        string message = Assert.Throws<WrongInputException>(() => WebhookTarget.Read(options)).Message;

        Assert.Contains("at least 16 characters", message, StringComparison.Ordinal);
        Assert.DoesNotContain(secret, message, StringComparison.Ordinal);
    }

    private async Task<bool> SendAsync(string url, WebhookPacing? pacing = null)
    {
        var target = WebhookTarget.Read(new WebhookOptions(new Uri(url)) { SecretFile = _folder.Write("secret", WebhookReceiver.Secret + "\n") });
        using var sender = new WebhookSender(target, pacing ?? Quick, TimeProvider.System, _log);
        return await sender.SendAsync(Notice, TestContext.Current.CancellationToken);
    }
}
