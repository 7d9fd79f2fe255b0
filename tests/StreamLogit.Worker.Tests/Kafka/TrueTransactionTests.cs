using System.Diagnostics;
using System.Text.Json;
using Confluent.Kafka;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Kafka;

/// <summary>Exactly-once of the real program on a broker with transactions, killed again and again. Skipped where there is no such broker.</summary>
public sealed class TrueTransactionTests(TrueBroker broker) : IClassFixture<TrueBroker>, IDisposable
{
    private readonly TemporaryFolder _folder = new();
    private readonly string _name = $"streamlogit-{Guid.NewGuid():N}";

    public void Dispose() => _folder.Dispose();

    private string Events => $"{_name}-events";

    private string Scores => $"{_name}-scores";

    private async Task<string> ArrangeAsync(int partitions)
    {
        await broker.CreateTopicAsync(Events, partitions);
        await broker.CreateTopicAsync(Scores, 1);
        string definition = await File.ReadAllTextAsync(DemoStreams.File("ferry-tickets-kafka.json"), TestContext.Current.CancellationToken);
        int topics = definition.IndexOf("  \"kafka\"", StringComparison.Ordinal);
        // Partitions of a backlog are read at different paces: no event may give up waiting for its label meanwhile.
        string head = definition[..topics].Replace("\"wait\": \"30d\"", "\"wait\": \"3650d\"", StringComparison.Ordinal);
        return _folder.Write("definition.json", head + $$"""
              "kafka": { "servers": "{{broker.Servers}}" },
              "source": { "kafka": { "topics": "{{Events}}", "group": "{{_name}}", "properties": { "session.timeout.ms": 6000, "max.poll.interval.ms": 10000 } } },
              "scores": { "kafka": { "topic": "{{Scores}}", "everyEvents": 1000 } },
              "state": { "folder": "state", "every": "3s" }
            }
            """);
    }

    private string Synthesize(int records)
    {
        string path = _folder["recording.jsonl"];
        File.WriteAllBytes(path, StreamLogitProcess.Run("synth", "ferry-tickets", "--records", $"{records}", "--seed", "8").OutputBytes);
        return path;
    }

    private static void Publish(string definition, string recording)
    {
        var result = StreamLogitProcess.Run("publish", definition, recording);
        Assert.True(result.ExitCode == 0, result.Errors);
    }

    private static (int Events, int Labels) Count(string recording)
    {
        int events = File.ReadLines(recording).Count(line => line.Contains("\"price\"", StringComparison.Ordinal));
        return (events, File.ReadLines(recording).Count() - events);
    }

    /// <summary>Has another consumer join the group for a moment, so that partitions go and come back.</summary>
    private void Disturb(TimeSpan duration)
    {
        using var consumer = new ConsumerBuilder<Ignore, Ignore>(new ConsumerConfig(new Dictionary<string, string> { ["partition.assignment.strategy"] = "cooperative-sticky" })
        {
            BootstrapServers = broker.Servers, GroupId = _name, EnableAutoCommit = false, SessionTimeoutMs = 6000,
        }).Build();
        consumer.Subscribe(Events);
        var watch = Stopwatch.StartNew();
        while (watch.Elapsed < duration) consumer.Consume(TimeSpan.FromMilliseconds(100));
        consumer.Close();
    }

    [Fact]
    public async Task Run_KilledThirtyTimesAndRebalanced_ScoresEveryEventOnceAndLearnsEveryLabelOnce()
    {
        Assert.SkipUnless(broker.Servers is not null, broker.Reason);
        const int Kills = 30;
        string definition = await ArrangeAsync(partitions: 4);
        string recording = Synthesize(400_000);
        var (events, labels) = Count(recording);
        Publish(definition, recording);
        var random = new Random(8);

        for (int kill = 0; kill < Kills; kill++)
        {
            // At a speed with which the stream outlasts the kills.
            using var worker = StreamLogitProcess.Start("run", definition, "--set", "source.kafka.properties[\"max.partition.fetch.bytes\"]=65536", "--speed", "8000000x");
            await Task.Delay(TimeSpan.FromSeconds(4 + 5 * random.NextDouble()), TestContext.Current.CancellationToken);
            if (kill % 5 == 4) Disturb(TimeSpan.FromSeconds(3));
            worker.Kill();
            worker.WaitForEnd();
        }
        var last = StreamLogitProcess.Run("run", definition, "--until-end");

        Assert.True(last.ExitCode == 0, last.Errors);
        var scores = broker.ReadCommitted(Scores);
        Assert.Equal(events, scores.Select(score => score.Key).Distinct().Count());
        Assert.Equal(events, scores.Count);
        AssertLearned(labels);
    }

    [Fact]
    public async Task Run_OnePartitionKilledAgainAndAgain_GivesTheBytesOfAnUndisturbedRun()
    {
        Assert.SkipUnless(broker.Servers is not null, broker.Reason);
        string definition = await ArrangeAsync(partitions: 1);
        string recording = Synthesize(100_000);
        using var undisturbed = new WorkerFolder("ferry-tickets");
        File.Copy(recording, undisturbed.Recording);
        Assert.Equal(0, StreamLogitProcess.Run(undisturbed.RunArguments(100_000, "--set", "labels.wait=3650d")).ExitCode);
        Publish(definition, recording);
        var random = new Random(9);

        for (int kill = 0; kill < 5; kill++)
        {
            using var worker = StreamLogitProcess.Start("run", definition, "--speed", "100000000x");
            await Task.Delay(TimeSpan.FromSeconds(4 + 5 * random.NextDouble()), TestContext.Current.CancellationToken);
            worker.Kill();
            worker.WaitForEnd();
        }
        var last = StreamLogitProcess.Run("run", definition, "--until-end");

        Assert.True(last.ExitCode == 0, last.Errors);
        Assert.Equal(File.ReadLines(undisturbed.Scores), broker.ReadCommitted(Scores).Select(score => score.Value));
    }

    [Fact]
    public async Task Run_ASecondOfTheSameName_FencesTheFirst()
    {
        Assert.SkipUnless(broker.Servers is not null, broker.Reason);
        string definition = await ArrangeAsync(partitions: 2);
        string recording = Synthesize(20_000);
        var (events, _) = Count(recording);
        Publish(definition, recording);
        using var first = StreamLogitProcess.Start("run", definition, "--speed", "30000000x");
        first.WaitForMessage("reads ");

        // A state of its own: what the first has published it finds by the group's offsets.
        var second = StreamLogitProcess.Run("run", definition, "--until-end", "--set", $"state.folder={_folder["other"]}");

        Assert.True(second.ExitCode == 0, second.Errors);
        var ended = first.WaitForEnd();
        Assert.Equal(1, ended.ExitCode);
        Assert.Contains("has taken over", ended.Errors, StringComparison.Ordinal);
        var scores = broker.ReadCommitted(Scores);
        Assert.Equal(events, scores.Select(score => score.Key).Distinct().Count());
        Assert.Equal(events, scores.Count);
    }

    private void AssertLearned(int labels)
    {
        var shown = StreamLogitProcess.Run("show", _folder["state"], "--json");
        using var json = JsonDocument.Parse(shown.Output);
        Assert.Equal(labels, json.RootElement.GetProperty("version").GetInt64());
    }
}
