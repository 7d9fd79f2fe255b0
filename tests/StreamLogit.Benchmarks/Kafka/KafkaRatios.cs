using System.Globalization;
using Confluent.Kafka;
using Microsoft.Extensions.Logging.Abstractions;
using StreamLogit.Engine.Records;
using StreamLogit.Kafka;
using StreamLogit.Pipeline;

namespace StreamLogit.Benchmarks.Kafka;

/// <summary>
/// A worker between topics against a loop that only reads messages and writes as many of the shape and size of scores, with the same client and settings, on the client library's mock cluster in another
/// process. The mock accepts transactions and does nothing for them: with exactly-once only the client's part of the work is measured.
/// </summary>
internal static class KafkaRatios
{
    // The mock keeps 5 MiB of a partition.
    private const int Partitions = 40;
    private const int EventsPerPartition = 12_000;
    private const int ScorePartitions = 4;
    private const int Rounds = 5;

    // About those of a score with three reasons.
    private const int ScoreBytes = 340;
    private const int KeyBytes = 9;

    private static readonly Lazy<(double AtLeastOnce, double ExactlyOnce)> Measured = new(Measure);
    private static int _groups;

    public static double AtLeastOnceAgainstBareLoop() => Measured.Value.AtLeastOnce;

    public static double ExactlyOnceAgainstBareLoop() => Measured.Value.ExactlyOnce;

    private static (double AtLeastOnce, double ExactlyOnce) Measure()
    {
        using var broker = MockBroker.Start($"{KafkaStream.Events}:{Partitions}", $"{KafkaStream.Scores}:{ScorePartitions}");
        byte[][] events = KafkaStream.Create(Partitions * EventsPerPartition);
        KafkaStream.Fill(broker.Servers, events, Partitions);
        var (bare, bareInTransactions, least, exactly) = (new List<KafkaRun>(), new List<KafkaRun>(), new List<KafkaRun>(), new List<KafkaRun>());
        for (int round = 0; round <= Rounds; round++)
        {
            bare.Add(BareLoop(broker.Servers, events.Length, isExactlyOnce: false));
            least.Add(Worker(broker.Servers, events.Length, isExactlyOnce: false));
            bareInTransactions.Add(BareLoop(broker.Servers, events.Length, isExactlyOnce: true));
            exactly.Add(Worker(broker.Servers, events.Length, isExactlyOnce: true));
        }
        Tell("bare loop", bare);
        Tell("worker, at least once", least);
        Tell("bare loop in transactions", bareInTransactions);
        Tell("worker, exactly once", exactly);
        return (MedianRatio(least, bare), MedianRatio(exactly, bareInTransactions));
    }

    private static double MedianRatio(List<KafkaRun> worker, List<KafkaRun> bare) =>
        worker.Zip(bare).Skip(1).Select(pair => pair.First.Rate / pair.Second.Rate).Order().ElementAt(Rounds / 2);

    private static void Tell(string name, List<KafkaRun> runs)
    {
        // The first warms up.
        var median = runs.Skip(1).OrderBy(run => run.Rate).ElementAt(Rounds / 2);
        Console.Error.WriteLine(string.Create(
            CultureInfo.InvariantCulture, $"{name}: {median.Rate / 1000:F0} k messages/s, {median.CpuMicroseconds:F2} us of processor and {median.AllocatedBytes:F0} bytes allocated a message"));
    }

    private static KafkaRun BareLoop(string servers, int messages, bool isExactlyOnce)
    {
        using var consumer = new ConsumerBuilder<Ignore, byte[]>(new ConsumerConfig(new Dictionary<string, string> { ["fetch.queue.backoff.ms"] = "10" })
        {
            BootstrapServers = servers, GroupId = NewGroup(), AutoOffsetReset = AutoOffsetReset.Earliest, EnableAutoOffsetStore = false, ConsumeResultFields = "none",
        }).Build();
        var config = new ProducerConfig { BootstrapServers = servers, EnableIdempotence = true, LingerMs = isExactlyOnce ? 0 : 5, DeliveryReportFields = "none" };
        if (isExactlyOnce) (config.TransactionalId, config.EnableDeliveryReports) = (NewGroup(), false);
        using var producer = new ProducerBuilder<byte[], byte[]>(config).Build();
        if (isExactlyOnce) producer.InitTransactions(TimeSpan.FromSeconds(30));
        consumer.Subscribe(KafkaStream.Events);
        Func<int, KafkaRun>? run = null;
        Action<DeliveryReport<byte[], byte[]>>? onDelivered = isExactlyOnce ? null : _ => { };
        var message = new Message<byte[], byte[]>
        {
            Key = new byte[KeyBytes],
            Value = new byte[ScoreBytes],
            Headers = new Headers { { "content-type", "application/json"u8.ToArray() }, { "model-version", "123456"u8.ToArray() } },
        };
        var topic = new TopicPartition(KafkaStream.Scores, Partition.Any);
        for (int i = 0; i < messages; i++)
        {
            var result = consumer.Consume(TimeSpan.FromSeconds(30)) ?? throw new TimeoutException("No message came for 30 s.");
            run ??= KafkaRun.Begin();
            if (isExactlyOnce && i % 10_000 == 0)
            {
                if (i > 0) producer.CommitTransaction(TimeSpan.FromSeconds(30));
                producer.BeginTransaction();
            }
            result.Message.Value.AsSpan(7, KeyBytes).CopyTo(message.Key);
            result.Message.Value.AsSpan(0, Math.Min(ScoreBytes, result.Message.Value.Length)).CopyTo(message.Value);
            while (!TryProduce()) Thread.Sleep(1);
        }
        if (isExactlyOnce) producer.CommitTransaction(TimeSpan.FromSeconds(30));
        producer.Flush(TimeSpan.FromSeconds(30));
        var taken = run!(messages);
        consumer.Close();
        return taken;

        bool TryProduce()
        {
            try
            {
                producer.Produce(topic, message, onDelivered);
                return true;
            }
            catch (ProduceException<byte[], byte[]> e) when (e.Error.Code == ErrorCode.Local_QueueFull)
            {
                return false;
            }
        }
    }

    private static KafkaRun Worker(string servers, int messages, bool isExactlyOnce)
    {
        string folder = Directory.CreateTempSubdirectory("streamlogit-").FullName;
        try
        {
            var definition = KafkaStream.Definition(servers, NewGroup(), folder, isExactlyOnce);
            var ends = KafkaEnds.Open(definition, TimeProvider.System, NullLogger.Instance);
            var source = new TimedSource(ends.Source);
            using var run = new StreamRun(definition, ends with { Source = source }, new LoopOptions(), TimeProvider.System);
            run.RunAsync(CancellationToken.None).GetAwaiter().GetResult();
            if (run.Progress.Records != messages) throw new InvalidOperationException($"{run.Progress.Records} of {messages} messages were scored.");
            return source.Run!(messages);
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    private static string NewGroup() => $"group-{++_groups}";

    private sealed class TimedSource(IRecordSource inner) : IRecordSource
    {
        public Func<int, KafkaRun>? Run { get; private set; }

        public SourcePosition Position => inner.Position;

        public SourceProgress Progress => inner.Progress;

        public void Seek(SourcePosition position) => inner.Seek(position);

        public void Committed(SourcePosition position) => inner.Committed(position);

        public async ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
        {
            var outcome = await inner.FillAsync(batch, maximumRecords, cancellation).ConfigureAwait(false);
            if (outcome == FillOutcome.Filled) Run ??= KafkaRun.Begin();
            return outcome;
        }

        public void Dispose() => inner.Dispose();
    }
}
