using System.Text;
using StreamLogit.Kafka.Tests.Log;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Tests.Runs;

/// <summary>
/// A worker between topics of the test's own transactional log, which dies or fails at every step in turn: every event has exactly one committed score, every label
/// is learned once, and all scores are those of an undisturbed run, or of a replay of what the worker recorded.
/// </summary>
public sealed class ExactlyOnceTests : IDisposable
{
    private const string Events = "tickets";
    private const string Scores = "scores";
    private const string Rejects = "rejects";
    private const string Group = "quay";

    private readonly List<TemporaryFolder> _folders = [];

    public void Dispose()
    {
        foreach (var folder in _folders) folder.Dispose();
    }

    private TemporaryFolder NewFolder()
    {
        var folder = new TemporaryFolder(inMemory: true);
        _folders.Add(folder);
        return folder;
    }

    private static TransactionalLog NewLog(int records, int partitions)
    {
        var log = new TransactionalLog();
        log.CreateTopic(Events, partitions);
        log.CreateTopic(Scores, 1);
        log.CreateTopic(Rejects, 1);
        int number = 0;
        foreach (string line in Encoding.Latin1.GetString(LoopStream.Create(records)).Split('\n')[..^1])
        {
            // A label lies in the partition of its event, as with keys.
            int partition = number / 7 % partitions;
            log.Append(Events, partition, Encoding.Latin1.GetBytes(line));
            if (number++ % 11 == 0) log.Skip(Events, partition);
        }
        return log;
    }

    private static StreamDefinition Definition(TemporaryFolder folder, int commitEvery) => LoopStream.Definition(folder, commitEvery) with
    {
        Kafka = new KafkaOptions { Servers = "nowhere:1", GiveUpAfter = TimeSpan.FromSeconds(20) },
        Source = new KafkaSourceOptions { Topics = [Events], Group = Group, Instance = "main", UntilEnd = true },
        Scores = new TopicOutputOptions(Scores) { IsExactlyOnce = true, EveryEvents = 10, EveryTime = TimeSpan.FromDays(1) },
        Rejects = new TopicOutputOptions(Rejects),
        Recording = new RecordingOptions(folder["recorded"]),
    };

    private static async Task<StreamRun> RunAsync(StreamDefinition definition, LogProcess process, RecordedLog? messages = null)
    {
        var ends = KafkaEnds.Open(definition, TimeProvider.System, messages ?? new RecordedLog(), new LogClients(process, Group));
        // Closed at the end, it still tells its health and its model.
        using var run = new StreamRun(definition, ends, new LoopOptions { BatchSize = 9 }, new JumpingTime());
        await run.RunAsync(TestContext.Current.CancellationToken);
        return run;
    }

    private static async Task<bool> DiesAsync(StreamDefinition definition, LogProcess process)
    {
        try
        {
            await RunAsync(definition, process);
            return false;
        }
        catch (DeathException)
        {
            return true;
        }
    }

    private static string[] Committed(TransactionalLog log, string topic) => [.. log.ReadAll(topic).Select(message => Encoding.UTF8.GetString(message.Value))];

    /// <summary>What a worker between files gives for the records that a worker recorded, in their recorded order.</summary>
    private async Task<(string[] Scores, string Model)> ReplayAsync(TemporaryFolder recorded)
    {
        var folder = NewFolder();
        var definition = LoopStream.Definition(folder) with { Source = new FileSourceOptions(recorded["recorded"] + "/", RecordingFormat.ByName), State = null };
        using var run = LoopStream.Open(definition, new LoopOptions(), TimeProvider.System);
        await run.RunAsync(TestContext.Current.CancellationToken);
        return (await File.ReadAllLinesAsync(folder["scores.jsonl"], TestContext.Current.CancellationToken), SnapshotText.Of(run.Engine.Model()));
    }

    private async Task AssertExactlyOnceAsync(TransactionalLog log, TemporaryFolder folder, StreamRun last, int records, string because)
    {
        string[] scores = Committed(log, Scores);
        var (expected, model) = await ReplayAsync(folder);
        Assert.True(expected.SequenceEqual(scores), $"{because}: {scores.Length} committed scores, {expected.Length} of the replay");
        Assert.Equal(scores.Length, scores.Distinct().Count());
        Assert.Equal(model, SnapshotText.Of(last.Engine.Model()));
        Assert.Equal(records, last.Health.Records);
        Assert.Equal(last.Health.Events, scores.Length);
        Assert.Equal(last.Health.Rejected, Committed(log, Rejects).Length);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(4)]
    public async Task Run_Undisturbed_CommitsAllScoresAndOffsets(int partitions)
    {
        const int Records = 500;
        var log = NewLog(Records, partitions);
        var folder = NewFolder();

        var run = await RunAsync(Definition(folder, commitEvery: 130), new LogProcess(log, seed: 1));

        await AssertExactlyOnceAsync(log, folder, run, Records, "undisturbed");
        Assert.True(run.Progress.Transactions >= Records / 30);
        for (int partition = 0; partition < partitions; partition++)
        {
            var (message, _) = log.Next(Events, partition, log.Committed[(Group, Events, partition)]);
            Assert.Null(message);
        }
    }

    [Fact]
    public async Task Run_OnePartition_GivesTheScoresOfAFile()
    {
        const int Records = 500;
        var log = NewLog(Records, 1);
        var folder = NewFolder();
        folder.Write("quay.jsonl", LoopStream.Create(Records));
        await RunAsync(Definition(folder, commitEvery: 130), new LogProcess(log, seed: 1));

        var files = NewFolder();
        files.Write("quay.jsonl", LoopStream.Create(Records));
        using var run = LoopStream.Open(LoopStream.Definition(files), new LoopOptions(), TimeProvider.System);
        await run.RunAsync(TestContext.Current.CancellationToken);

        Assert.Equal(await File.ReadAllLinesAsync(files["scores.jsonl"], TestContext.Current.CancellationToken), Committed(log, Scores));
    }

    // Every call of every client, before and after it is carried out; then another process finishes.
    [Theory]
    [InlineData("producer", 1)]
    [InlineData("consumer", 3)]
    [InlineData("producer", 3)]
    public async Task Run_DiesAtEachCallInTurn_ScoresEveryEventOnce(string client, int partitions)
    {
        const int Records = 60;
        int tried = 0;
        for (bool isReached = true; isReached; tried++)
        {
            var step = new LogStep(client, 1 + tried / 2, tried % 2 == 1);
            var log = NewLog(Records, partitions);
            using var folder = new TemporaryFolder(inMemory: true);
            var definition = Definition(folder, commitEvery: 25);
            var process = new LogProcess(log, seed: 1, step);

            isReached = await DiesAsync(definition, process);
            var run = await RunAsync(definition, new LogProcess(log, seed: 2));
            await AssertExactlyOnceAsync(log, folder, run, Records, $"{client} died at {step}");
        }

        Assert.InRange(tried, 80, 300);
    }

    [Theory]
    [InlineData("Retriable")]
    [InlineData("AbortRequired")]
    [InlineData("Fatal")]
    public async Task Run_EachCallOfTheProducerFailsInTurn_RecoversByItself(string kind)
    {
        const int Records = 60;
        int tried = 0;
        for (bool isReached = true; isReached; tried++)
        {
            var step = new LogStep("producer", 1 + tried / 2, tried % 2 == 1);
            var log = NewLog(Records, 3);
            using var folder = new TemporaryFolder(inMemory: true);
            var process = new LogProcess(log, seed: 1, step, Enum.Parse<LogFault>(kind));

            var run = await RunAsync(Definition(folder, commitEvery: 25), process);
            isReached = process.WasReached;
            await AssertExactlyOnceAsync(log, folder, run, Records, $"{kind} at {step}");
        }

        Assert.InRange(tried, 80, 300);
    }

    [Fact]
    public async Task Run_DiesAgainAndAgain_ScoresEveryEventOnce()
    {
        const int Records = 2000;
        var random = new Random(7);
        var log = NewLog(Records, 4);
        var folder = NewFolder();
        var definition = Definition(folder, commitEvery: 300);
        int deaths = 0;
        while (true)
        {
            string client = random.Next(2) == 0 ? "consumer" : "producer";
            var process = new LogProcess(log, seed: deaths, new LogStep(client, random.Next(1, 700), random.Next(2) == 0));
            if (!await DiesAsync(definition, process)) break;
            deaths++;
        }
        var run = await RunAsync(definition, new LogProcess(log, seed: 99));

        Assert.True(deaths > 5, $"only {deaths} deaths");
        await AssertExactlyOnceAsync(log, folder, run, Records, $"{deaths} deaths");
    }

    // Within each commit of the state, and each entry of the journal.
    [Fact]
    public async Task Run_DiesWithinEachWriteOfTheStateInTurn_ScoresEveryEventOnce()
    {
        const int Records = 60;
        int step = 1;
        for (bool isDead = true; isDead; step++)
        {
            var log = NewLog(Records, 3);
            using var folder = new TemporaryFolder(inMemory: true);
            var definition = Definition(folder, commitEvery: 25);
            var death = new Death(step);
            isDead = false;
            try
            {
                var ends = KafkaEnds.Open(definition, TimeProvider.System, new RecordedLog(), new LogClients(new LogProcess(log, seed: 1), Group));
                using var dying = new StreamRun(definition, ends, new LoopOptions { BatchSize = 9 }, new JumpingTime()) { BeforeCommit = death.Step };
                await dying.RunAsync(TestContext.Current.CancellationToken);
            }
            catch (DeathException)
            {
                isDead = true;
            }
            var run = await RunAsync(definition, new LogProcess(log, seed: 2));
            await AssertExactlyOnceAsync(log, folder, run, Records, $"died in write {step}");
        }

        Assert.InRange(step, 7, 30);
    }

    [Fact]
    public async Task Run_PartitionGoesAndComesBack_PublishesNothingTwice()
    {
        for (int call = 5; call < 120; call += 5)
        {
            const int Records = 200;
            var log = NewLog(Records, 3);
            using var folder = new TemporaryFolder(inMemory: true);
            var process = new LogProcess(log, seed: call);
            process.Revocations[call] = 1;

            var run = await RunAsync(Definition(folder, commitEvery: 90), process);
            await AssertExactlyOnceAsync(log, folder, run, Records, $"partition 1 gone at call {call}");
        }
    }

    [Fact]
    public async Task Run_AnotherTakesOver_EndsAndPublishesNothingMore()
    {
        const int Records = 500;
        var log = NewLog(Records, 2);
        var folder = NewFolder();
        var definition = Definition(folder, commitEvery: 100);
        var process = new LogProcess(log, seed: 1);
        int published = 0;
        process.Meanwhile[("producer", 100)] = () =>
        {
            log.Own($"{Group}.main");
            published = Committed(log, Scores).Length;
        };

        var error = await Assert.ThrowsAsync<PipelineException>(() => RunAsync(definition, process));

        Assert.StartsWith("Another worker of the same group and instance has taken over", error.Message, StringComparison.Ordinal);
        Assert.InRange(published, 1, 100);
        Assert.Equal(published, Committed(log, Scores).Length);
        var run = await RunAsync(definition, new LogProcess(log, seed: 2));
        await AssertExactlyOnceAsync(log, folder, run, Records, "taken over");
    }

    [Fact]
    public async Task Run_JournalledRecordsAreGone_EndsAndSaysSo()
    {
        var log = NewLog(200, 2);
        var folder = NewFolder();
        var definition = Definition(folder, commitEvery: 10_000);
        Assert.True(await DiesAsync(definition, new LogProcess(log, seed: 1, new LogStep("producer", 100, IsAfter: false))));
        log.Remove(Events, 0, 3);

        var error = await Assert.ThrowsAsync<PipelineException>(() => RunAsync(definition, new LogProcess(log, seed: 2)));

        Assert.Contains("are not those that were read before", error.Message, StringComparison.Ordinal);
    }
}
