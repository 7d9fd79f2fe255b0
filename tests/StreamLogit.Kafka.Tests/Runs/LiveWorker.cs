using StreamLogit.Kafka.Clients;
using StreamLogit.Kafka.Tests.MockCluster;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Tests.Runs;

/// <summary>A worker that runs between topics of a mock cluster until it is stopped, for tests that disturb it.</summary>
internal sealed class LiveWorker : IAsyncDisposable
{
    private static readonly TimeSpan Limit = TimeSpan.FromMinutes(2);

    private readonly TemporaryFolder _folder = new(inMemory: true);
    private readonly CancellationTokenSource _stop = new();
    private readonly StreamRun _run;
    private readonly Task _running;

    public LiveWorker(KafkaMock cluster, KafkaSourceOptions source, bool isExactlyOnce, TimeSpan? giveUpAfter = null)
    {
        var definition = LoopStream.Definition(_folder, commitEvery: 200) with
        {
            Kafka = new KafkaOptions
            {
                Servers = cluster.Servers,
                GiveUpAfter = giveUpAfter ?? Limit,
                Properties = System.Collections.Immutable.ImmutableSortedDictionary<string, string>.Empty.Add("reconnect.backoff.max.ms", "500"),
            },
            Source = source with { UntilEnd = false },
            Scores = new TopicOutputOptions("scores") { IsExactlyOnce = isExactlyOnce },
            Rejects = new TopicOutputOptions("rejects"),
        };
        _run = new StreamRun(definition, KafkaEnds.Open(definition, TimeProvider.System, Log, new KafkaClients()), new LoopOptions(), TimeProvider.System);
        _running = Task.Run(() => _run.RunAsync(_stop.Token));
    }

    public RecordedLog Log { get; } = new();

    public StreamRun Run => _run;

    /// <summary>Events of the topics, whose ids are counted up.</summary>
    public static IEnumerable<string> Events(int first, int count) =>
        Enumerable.Range(first, count).Select(i => $$"""{"id":"e-{{i}}","time":"2026-03-01T08:15:30Z","amount":{{i % 50}},"country":"QX","card":"c{{i % 7}}"}""");

    /// <summary>Waits until something is so; throws what ended the worker, if it ends before.</summary>
    public async Task UntilAsync(string what, Func<bool> isSo)
    {
        long began = TimeProvider.System.GetTimestamp();
        while (!isSo())
        {
            if (_running.IsCompleted) await _running;
            if (TimeProvider.System.GetElapsedTime(began) > Limit)
                throw new TimeoutException($"Within {Limit} it did not come to this: {what}. Records: {_run.Progress.Records}. Log:\n{string.Join('\n', Log.Lines.Select(line => line.Text))}");
            await Task.Delay(10, TestContext.Current.CancellationToken);
        }
    }

    public Task UntilRecordsAsync(long records) => UntilAsync($"{records} records scored", () => _run.Progress.Records >= records);

    /// <summary>Waits for the worker to end by itself.</summary>
    public Task EndAsync() => _running.WaitAsync(Limit, TestContext.Current.CancellationToken);

    /// <summary>Stops the worker as on a request.</summary>
    public async Task StopAsync()
    {
        await _stop.CancelAsync();
        await _running.WaitAsync(Limit, TestContext.Current.CancellationToken);
    }

    public async ValueTask DisposeAsync()
    {
        await _stop.CancelAsync();
        await ((Task)_running.ContinueWith(_ => { }, TaskScheduler.Default)).WaitAsync(Limit);
        _run.Dispose();
        _folder.Dispose();
        _stop.Dispose();
    }

    /// <summary>The ids of scores.</summary>
    public static IEnumerable<string> Ids(IEnumerable<Confluent.Kafka.ConsumeResult<string?, string>> scores) => scores.Select(score => score.Message.Key!);
}
