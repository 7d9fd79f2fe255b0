using System.Collections;
using System.Diagnostics;
using System.Globalization;
using System.Text;
using Confluent.Kafka;
using Microsoft.Extensions.Logging.Abstractions;
using StreamLogit.Kafka;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Benchmarks.Kafka;

/// <summary>
/// A worker at least once between topics of the mock cluster for minutes, with a fault every half a minute: is every event scored, how long does it take from the sending of an event to the
/// reading of its score, and does memory stay flat?
/// </summary>
internal static class KafkaSoak
{
    // The mock cluster handles each request of each partition one by one: few partitions and a little patience of the senders keep the requests few.
    private const int Partitions = 8;
    private const int LingerMilliseconds = 20;
    private static readonly TimeSpan FaultEvery = TimeSpan.FromSeconds(30);
    private static readonly TimeSpan Patience = TimeSpan.FromMinutes(2);

    /// <returns>0 if every event has a score, else 1.</returns>
    public static async Task<int> RunAsync(double minutes, int eventsPerSecond)
    {
        using var broker = MockBroker.Start($"{KafkaStream.Events}:{Partitions}", $"{KafkaStream.Scores}:{Partitions}");
        string folder = Directory.CreateTempSubdirectory("streamlogit-").FullName;
        int total = (int)(minutes * 60 * eventsPerSecond);
        var sent = new long[total];
        using var stop = new CancellationTokenSource();
        try
        {
            var definition = KafkaStream.Definition(broker.Servers, "soak", folder, isExactlyOnce: false);
            var scores = (TopicOutputOptions)definition.Scores!;
            definition = definition with
            {
                Source = (KafkaSourceOptions)definition.Source! with { UntilEnd = false },
                Scores = scores with { Properties = scores.Properties.Add("linger.ms", LingerMilliseconds.ToString(CultureInfo.InvariantCulture)) },
            };
            using var run = new StreamRun(definition, KafkaEnds.Open(definition, TimeProvider.System, NullLogger.Instance), new LoopOptions(), TimeProvider.System);
            var worker = Task.Run(() => run.RunAsync(stop.Token));
            var reader = Task.Run(() => Read(broker.Servers, sent, stop.Token));
            var sender = Task.Run(() => Send(broker.Servers, sent, eventsPerSecond));
            var faults = Task.Run(() => DisturbAsync(broker, sender));
            await Task.WhenAll(sender, faults);
            var waited = Stopwatch.StartNew();
            while (!worker.IsCompleted && run.Progress.Records < total && waited.Elapsed < Patience) await Task.Delay(100);
            await Task.Delay(TimeSpan.FromSeconds(5));
            await stop.CancelAsync();
            await worker;
            return Tell(total, await reader);
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    private static async Task DisturbAsync(MockBroker broker, Task sender)
    {
        var watch = Stopwatch.StartNew();
        for (int fault = 0; await Task.WhenAny(sender, Task.Delay(FaultEvery)) != sender; fault++)
        {
            string[] commands = (fault % 4) switch
            {
                0 => ["away", "back"],
                1 => ["slow 100", "slow 0"],
                2 => [$"coordinator soak {1 + fault / 4 % MockBroker.Brokers}"],
                _ => [$"leader {KafkaStream.Events} {1 + fault / 4 % MockBroker.Brokers}", $"leader {KafkaStream.Scores} {1 + fault / 4 % MockBroker.Brokers}"],
            };
            foreach (string command in commands)
            {
                broker.Do(command);
                await Task.Delay(TimeSpan.FromSeconds(5));
            }
            Console.Error.WriteLine(string.Create(
                CultureInfo.InvariantCulture, $"{watch.Elapsed.TotalSeconds:F0} s: {string.Join(", ", commands)}; {Process.GetCurrentProcess().WorkingSet64 >> 20} MiB of memory, {GC.GetTotalMemory(false) >> 20} MiB of objects"));
        }
    }

    private static void Send(string servers, long[] sent, int eventsPerSecond)
    {
        using var producer = new ProducerBuilder<Null, byte[]>(new ProducerConfig { BootstrapServers = servers, LingerMs = LingerMilliseconds, QueueBufferingMaxMessages = 2_000_000 }).SetLogHandler((_, _) => { }).Build();
        var start = Stopwatch.StartNew();
        for (int i = 0; i < sent.Length; i++)
        {
            while (start.Elapsed.TotalSeconds * eventsPerSecond < i) Thread.Sleep(1);
            string time = DateTimeOffset.UnixEpoch.AddSeconds(1_772_000_000 + i / 100).ToString("yyyy-MM-ddTHH:mm:ssZ", CultureInfo.InvariantCulture);
            string text = string.Create(CultureInfo.InvariantCulture, $"{{\"id\":\"s-{i}\",\"time\":\"{time}\",\"price\":{i % 90},\"passengers\":2,\"daysAhead\":{i % 30},\"country\":\"Q{i % 7}\",\"channel\":\"app\",\"route\":\"R{i % 11}\",\"label\":\"{(i % 50 == 0 ? "stolen" : "paid")}\"}}");
            sent[i] = Stopwatch.GetTimestamp();
            producer.Produce(new TopicPartition(KafkaStream.Events, i % Partitions), new Message<Null, byte[]> { Value = Encoding.UTF8.GetBytes(text) });
        }
        producer.Flush(Patience);
    }

    private static (BitArray Scored, int Twice, List<double> Milliseconds) Read(string servers, long[] sent, CancellationToken stop)
    {
        using var consumer = new ConsumerBuilder<string, Ignore>(new ConsumerConfig(new Dictionary<string, string> { ["fetch.queue.backoff.ms"] = "10" })
        {
            BootstrapServers = servers, GroupId = "reader", EnableAutoCommit = false, AutoOffsetReset = AutoOffsetReset.Earliest, FetchWaitMaxMs = 10,
        }).SetLogHandler((_, _) => { }).Build();
        consumer.Assign(Enumerable.Range(0, Partitions).Select(partition => new TopicPartitionOffset(KafkaStream.Scores, partition, Offset.Beginning)));
        var (scored, twice, milliseconds) = (new BitArray(sent.Length), 0, new List<double>(sent.Length));
        while (!stop.IsCancellationRequested)
        {
            var result = consumer.Consume(TimeSpan.FromMilliseconds(100));
            if (result is null) continue;
            int number = int.Parse(result.Message.Key.AsSpan(2), CultureInfo.InvariantCulture);
            if (scored[number]) twice++;
            scored[number] = true;
            milliseconds.Add(Stopwatch.GetElapsedTime(sent[number]).TotalMilliseconds);
        }
        return (scored, twice, milliseconds);
    }

    private static int Tell(int total, (BitArray Scored, int Twice, List<double> Milliseconds) read)
    {
        int missing = total - read.Scored.Cast<bool>().Count(isScored => isScored);
        read.Milliseconds.Sort();
        double Part(double share) => read.Milliseconds[(int)(share * (read.Milliseconds.Count - 1))];
        Console.Out.WriteLine(string.Create(
            CultureInfo.InvariantCulture,
            $"{total} events, {missing} without a score, {read.Twice} scored twice; from sending to reading {Part(0.5):F1} ms (p50), {Part(0.99):F1} ms (p99), {Part(1):F0} ms at most"));
        return missing == 0 ? 0 : 1;
    }
}
