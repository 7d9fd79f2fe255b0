using System.Text;
using StreamLogit.Kafka.Clients;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Tests.Runs;

/// <summary>A whole worker between topics of the mock cluster, against the same worker between files.</summary>
public sealed class WorkerOnKafkaTests : IClassFixture<KafkaMockRoom>, IDisposable
{
    private const int Lines = 3000;

    private readonly KafkaMockRoom _room;
    private readonly TemporaryFolder _folder = new();
    private readonly string _topic;
    private readonly string _scores;
    private readonly string _rejects;

    public WorkerOnKafkaTests(KafkaMockRoom room)
    {
        _room = room;
        (_topic, _scores, _rejects) = (room.NewName("tickets"), room.NewName("scores"), room.NewName("rejects"));
        foreach (string topic in new[] { _topic, _scores, _rejects }) room.Cluster.CreateTopic(topic, 1);
        byte[] stream = LoopStream.Create(Lines);
        _folder.Write("quay.jsonl", stream);
        room.Produce(_topic, 0, Encoding.Latin1.GetString(stream).Split('\n')[..^1]);
    }

    public void Dispose() => _folder.Dispose();

    private StreamDefinition Definition() => LoopStream.Definition(_folder, commitEvery: 500) with
    {
        Kafka = _room.Options(),
        Source = KafkaMockRoom.Source(_room.NewName("group"), _topic),
        Scores = new TopicOutputOptions(_scores),
        Rejects = new TopicOutputOptions(_rejects),
    };

    private async Task<StreamRun> RunAsync(StreamDefinition definition, CancellationToken stop)
    {
        using var run = new StreamRun(definition, KafkaEnds.Open(definition, TimeProvider.System, _room.Log, new KafkaClients()), new LoopOptions(), TimeProvider.System);
        await run.RunAsync(stop);
        return run;
    }

    private static async Task<(string[] Scores, string[] Rejects, string Health)> UndisturbedAsync()
    {
        using var folder = new TemporaryFolder();
        folder.Write("quay.jsonl", LoopStream.Create(Lines));
        var definition = LoopStream.Definition(folder);
        using var run = LoopStream.Open(definition, new LoopOptions(), TimeProvider.System);
        await run.RunAsync(TestContext.Current.CancellationToken);
        run.Dispose();
        return (File.ReadAllLines(folder["scores.jsonl"]), File.ReadAllLines(folder["rejects.jsonl"]), SnapshotText.Of(run.Engine.Model()));
    }

    [Fact(Timeout = 60_000)]
    public async Task Run_OnePartition_GivesTheScoresOfTheFile()
    {
        var expected = await UndisturbedAsync();

        var run = await RunAsync(Definition(), TestContext.Current.CancellationToken);

        Assert.Equal(expected.Scores, _room.ReadAll(_scores).Select(message => message.Message.Value));
        Assert.Equal(expected.Health, SnapshotText.Of(run.Engine.Model()));
        var rejects = _room.ReadAll(_rejects).Select(message => message.Message.Value).ToList();
        Assert.Equal(expected.Rejects.Length, rejects.Count);
        Assert.All(rejects, reject => Assert.StartsWith($$"""{"position":"{{_topic}}-0@""", reject, StringComparison.Ordinal));
    }

    [Fact(Timeout = 60_000)]
    public async Task Run_StoppedAndResumed_GoesOnWhereItCommitted()
    {
        var expected = await UndisturbedAsync();
        var definition = Definition() with { Source = KafkaMockRoom.Source(_room.NewName("group"), _topic) };
        using (var stop = new CancellationTokenSource())
        {
            var live = definition with { Source = (KafkaSourceOptions)definition.Source! with { UntilEnd = false } };
            using var run = new StreamRun(live, KafkaEnds.Open(live, TimeProvider.System, _room.Log, new KafkaClients()), new LoopOptions { BatchSize = 100 }, TimeProvider.System);
            var running = run.RunAsync(stop.Token);
            while (run.Progress.Records < 1000 && !running.IsCompleted) await Task.Delay(5, TestContext.Current.CancellationToken);
            await stop.CancelAsync();
            await running;
            Assert.InRange(run.Progress.Records, 1000, Lines);
        }

        var second = await RunAsync(definition, TestContext.Current.CancellationToken);

        Assert.True(second.IsResumed);
        Assert.Equal(expected.Scores, _room.ReadAll(_scores).Select(message => message.Message.Value));
        Assert.Equal(expected.Health, SnapshotText.Of(second.Engine.Model()));
    }
}
