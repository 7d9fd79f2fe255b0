using System.Text.Json;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Alarms;

/// <summary>From the definition to the receiver.</summary>
public sealed class AlarmRunTests : IDisposable
{
    // The first day of labels is bad enough to raise it, and the last weeks are good.
    private const string Alarm = """[ { "name": "losing", "metric": "logLoss", "window": "1d", "above": 0.13, "minimum": 50, "for": "1h" } ]""";

    private readonly WorkerFolder _folder = new WorkerFolder().Demo();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Run_AlarmInTheDefinition_ReachesTablesLogAndReceiverOnce()
    {
        using var receiver = new WebhookReceiver(500, 204);

        var first = Run(receiver.Url);
        var second = Run(receiver.Url); // there is nothing left to score

        Assert.Equal((0, 0), (first.ExitCode, second.ExitCode));
        var state = StreamLogitProcess.Run("show", _folder.State, "--health", "--json").Json;
        var expected = state.GetProperty("alarmChanges").EnumerateArray().Reverse().ToList();
        Assert.NotEmpty(expected);
        Assert.Equal("raised", expected[0].GetProperty("state").GetString());
        receiver.Next(); // was answered with 500
        foreach (var change in expected)
        {
            var (id, body) = receiver.Next();
            Assert.Equal($"pump-stations/{change.GetProperty("number")}", id);
            Assert.Equal(change.GetProperty("sentence").GetString(), body.GetProperty("sentence").GetString());
            Assert.Contains(change.GetProperty("sentence").GetString()!, first.Errors, StringComparison.Ordinal);
        }
        Assert.Equal(0, receiver.Count);
        Assert.Empty(receiver.Faults);
        Assert.StartsWith("Log-loss over 1d is 0.", expected[0].GetProperty("sentence").GetString(), StringComparison.Ordinal);
        Assert.Equal("losing", first.Table("alarm")[1][0]);
        Assert.DoesNotContain(WebhookReceiver.Secret, first.Errors + first.Output + File.ReadAllText(_folder["state/alarms-sent"]), StringComparison.Ordinal);
    }

    [Fact]
    public void Run_ReceiverHangs_ScoresAllTheSameAndTheNextRunSends()
    {
        string withoutWebhook = StreamLogitProcess.Run("replay", _folder.Definition, _folder.Recording, "--json").Json.GetProperty("scoreHash").GetString()!;
        using (var deaf = new WebhookReceiver(WebhookReceiver.Hang))
        {
            var result = Run(deaf.Url);
            Assert.Equal(0, result.ExitCode);
            Assert.Contains("still to be sent to the webhook; the next run sends them", result.Errors, StringComparison.Ordinal);
        }
        Assert.Equal(withoutWebhook, _folder.ScoreHash());

        using var receiver = new WebhookReceiver(200);
        Assert.Equal(0, Run(receiver.Url).ExitCode);

        var state = StreamLogitProcess.Run("show", _folder.State, "--health", "--json").Json;
        Assert.Equal(
            state.GetProperty("alarmChanges").EnumerateArray().Reverse().Select(change => change.GetProperty("number").GetInt64()),
            Enumerable.Range(0, receiver.Count).Select(_ => receiver.Next().Body.GetProperty("number").GetInt64()));
    }

    [Fact]
    public void Run_KilledAgainAndAgain_TheReceiverHasEveryChangeInTheEnd()
    {
        using var receiver = new WebhookReceiver(200);
        var received = new List<(long Number, string Sentence)>();
        for (int kills = 0; kills < 3; kills++)
        {
            using var process = StreamLogitProcess.Start("dotnet", [StreamLogitProcess.Program, .. Arguments(receiver.Url)], Secret, []);
            process.WaitForLength(_folder.Scores, 400_000 * (kills + 1));
            process.Kill();
        }

        Assert.Equal(0, Run(receiver.Url).ExitCode);

        while (receiver.Count > 0)
        {
            var body = receiver.Next().Body;
            received.Add((body.GetProperty("number").GetInt64(), body.GetProperty("sentence").GetString()!));
        }
        var state = StreamLogitProcess.Run("show", _folder.State, "--health", "--json").Json;
        var expected = state.GetProperty("alarmChanges").EnumerateArray().Select(change => (change.GetProperty("number").GetInt64(), change.GetProperty("sentence").GetString()!)).Order().ToList();
        Assert.NotEmpty(expected);
        // Some may have come twice, but then they say the same.
        Assert.Equal(expected, received.Distinct().Order());
        Assert.Empty(receiver.Faults);
    }

    [Theory]
    [InlineData("""{"url":"http://127.0.0.1:1","secretVariable":"NO_SUCH_SECRET"}""", "The environment variable NO_SUCH_SECRET, which webhook.secretVariable names, is not set")]
    [InlineData("""{"url":"http://127.0.0.1:1","secretFile":"/no/such/file"}""", "cannot be read from the file that webhook.secretFile names")]
    [InlineData("""{"url":"http://127.0.0.1:1"}""", "expected the secret that signs what is sent")]
    public void Run_WithoutTheSecret_IsRefusedBeforeAnythingIsDone(string webhook, string message)
    {
        var result = StreamLogitProcess.Run(_folder.RunArguments(1000, "--until-end", "--set", $"webhook={webhook}"));

        Assert.Equal(2, result.ExitCode);
        Assert.Contains(message, result.Errors, StringComparison.Ordinal);
        Assert.False(Directory.Exists(_folder.State));
    }

    private static (string, string)[] Secret => [("DUTY_SECRET", WebhookReceiver.Secret)];

    private ProgramResult Run(string url) => StreamLogitProcess.RunWith(Secret, Arguments(url));

    private string[] Arguments(string url) => _folder.RunArguments(
        2000, "--until-end", "--set", $"health.alarms={Alarm}", "--set", $"webhook={JsonSerializer.Serialize(new { url, secretVariable = "DUTY_SECRET" })}");
}
