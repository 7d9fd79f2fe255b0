using Microsoft.Extensions.Logging.Abstractions;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Health.Alarms;
using StreamLogit.Pipeline.Options;
using StreamLogit.Worker.Alarms;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Alarms;

public sealed class AlarmServiceTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();
    private readonly LogLines<AlarmService> _log = new();
    private readonly LogLines<WebhookService> _webhookLog = new();
    private HealthSnapshot _health = WithChanges(0);

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Run_ChangesAppear_AreLoggedAndSentInTheirOrder()
    {
        using var receiver = new WebhookReceiver(200);

        await RunAsync(receiver.Url, isResumed: false, changes: 5);

        Assert.Equal([1, 2, 3, 4, 5], Numbers(receiver, 5));
        Assert.Equal(0, receiver.Count);
        Assert.Equal(
            ["alarm 'a' is raised. Sentence 1.", "alarm 'a' is quiet again. Sentence 2.", "alarm 'a' is raised. Sentence 3."],
            _log.Lines.Take(3).Select(line => line.Text["Stream s: ".Length..]));
        Assert.Equal(5, Mark.Read());
    }

    [Fact]
    public async Task Run_Resumed_SendsWhatWasCommittedButNotSent()
    {
        using var receiver = new WebhookReceiver(200);
        _health = WithChanges(6);
        Mark.Write(4);

        await RunAsync(receiver.Url, isResumed: true, changes: 7);

        Assert.Equal([5, 6, 7], Numbers(receiver, 3));
        Assert.Equal(0, receiver.Count);
        Assert.Single(_log.Lines); // earlier runs have logged the others
    }

    [Theory]
    [InlineData(true)] // a state from before there was a webhook
    [InlineData(false)] // a mark that belongs to a state which is gone
    public async Task Run_NobodyKnowsWhatWasSent_SendsOnlyWhatIsNew(bool isResumed)
    {
        using var receiver = new WebhookReceiver(200);
        if (isResumed) _health = WithChanges(6);
        else Mark.Write(90);

        await RunAsync(receiver.Url, isResumed, changes: isResumed ? 7 : 1);

        Assert.Equal([isResumed ? 7 : 1], Numbers(receiver, 1));
        Assert.Equal(0, receiver.Count);
    }

    [Fact]
    public async Task Run_MoreChangesThanAreKept_SaysHowManyPassed()
    {
        using var receiver = new WebhookReceiver(200);

        await RunAsync(receiver.Url, isResumed: false, changes: 150);

        Assert.Equal(Enumerable.Range(51, 100), Numbers(receiver, 100));
        Assert.StartsWith("Stream s: 50 changes of alarms came too fast", _log.Lines.First().Text, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Post_ReceiverHangs_NeverWaitsAndDropsTheOldest()
    {
        using var receiver = new WebhookReceiver(WebhookReceiver.Hang);
        using var webhook = Webhook(receiver.Url, new WebhookPacing { QueueLength = 10, Grace = TimeSpan.Zero });
        await webhook.StartAsync(TestContext.Current.CancellationToken);
        webhook.Post(new AlarmNotice("s", Change(0)));
        receiver.Next(); // it is being sent now, without an answer

        for (int number = 1; number <= 1000; number++) webhook.Post(new AlarmNotice("s", Change(number)));

        Assert.Equal(990, webhook.Failed);
        Assert.Equal("Change 1 of alarm 'a' was not sent to the webhook: too many wait already", _webhookLog.Lines.First().Text);
        await webhook.StopAsync(TestContext.Current.CancellationToken).WaitAsync(StreamLogitProcess.Patience, TestContext.Current.CancellationToken);
        Assert.Equal("11 changes of alarms are still to be sent to the webhook; the next run sends them", _webhookLog.Lines.Last().Text);
        Assert.Null(Mark.Read());
    }

    private SentMark Mark => new(_folder[""]);

    private async Task RunAsync(string url, bool isResumed, int changes)
    {
        var cancellation = TestContext.Current.CancellationToken;
        using var webhook = Webhook(url, new WebhookPacing { Grace = StreamLogitProcess.Patience });
        using var alarms = new AlarmService("s", () => _health, isResumed, webhook, Mark, TimeProvider.System, _log);
        await webhook.StartAsync(cancellation);
        await alarms.StartAsync(cancellation);
        _health = WithChanges(changes);
        await alarms.StopAsync(cancellation);
        await webhook.StopAsync(cancellation);
    }

    private WebhookService Webhook(string url, WebhookPacing pacing)
    {
        var target = WebhookTarget.Read(new WebhookOptions(new Uri(url)) { SecretFile = _folder.Write("secret", WebhookReceiver.Secret) });
        var sender = new WebhookSender(target, pacing, TimeProvider.System, NullLogger<WebhookSender>.Instance);
        return new WebhookService(sender, pacing, Mark, TimeProvider.System, _webhookLog);
    }

    private static int[] Numbers(WebhookReceiver receiver, int count)
    {
        int[] numbers = [.. Enumerable.Range(0, count).Select(_ => receiver.Next().Body.GetProperty("number").GetInt32())];
        Assert.Empty(receiver.Faults);
        return numbers;
    }

    private static HealthSnapshot WithChanges(int count) => new()
    {
        Total = new HealthFigures(0, 0, 0, 0, 0, 0, 0),
        AlarmChanges = [.. Enumerable.Range(1, count).Reverse().Take(100).Select(Change)],
    };

    private static AlarmChange Change(int number) => new(number, "a", number, IsRaised: number % 2 == 1, number, $"Sentence {number}.");
}
