using System.Collections.Immutable;
using System.Text;
using Confluent.Kafka;
using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Options.Kafka;
using StreamLogit.Pipeline.Scenarios;

namespace StreamLogit.Benchmarks.Kafka;

/// <summary>Ferry payments that come with their labels, so that every message is scored and learned, and a worker for them.</summary>
internal static class KafkaStream
{
    public const string Events = "payments";
    public const string Scores = "scores";

    /// <summary>Events of some 250 bytes.</summary>
    public static byte[][] Create(int count)
    {
        using var bytes = new MemoryStream();
        ScenarioCatalog.Create("ferry-tickets", new ScenarioOptions { Records = count * 2 + 100_000 }).Write(bytes);
        var events = new List<byte[]>(count);
        foreach (string line in Encoding.UTF8.GetString(bytes.GetBuffer(), 0, (int)bytes.Length).Split('\n'))
        {
            if (!line.Contains("\"price\"", StringComparison.Ordinal)) continue;
            events.Add(Encoding.UTF8.GetBytes($"{line[..^1]},\"label\":\"{(events.Count % 100 == 7 ? "stolen" : "paid")}\"}}"));
            if (events.Count == count) return [.. events];
        }
        throw new InvalidOperationException("The scenario gave too few events.");
    }

    /// <summary>Sends the events to all partitions in turn.</summary>
    public static void Fill(string servers, byte[][] events, int partitions)
    {
        using var producer = new ProducerBuilder<Null, byte[]>(new ProducerConfig { BootstrapServers = servers, LingerMs = 20, QueueBufferingMaxMessages = 2_000_000 }).Build();
        for (int i = 0; i < events.Length; i++) producer.Produce(new TopicPartition(Events, i % partitions), new Message<Null, byte[]> { Value = events[i] });
        producer.Flush(TimeSpan.FromMinutes(1));
    }

    public static StreamDefinition Definition(string servers, string group, string stateFolder, bool isExactlyOnce) => new()
    {
        Engine = new EngineDefinition
        {
            Stream = "ferry-tickets",
            Record = new RecordOptions { LabelValues = new RecordOptions().LabelValues.Clear().Add("stolen", 1).Add("paid", 0) },
            Features =
            [
                new NumberFeature("price", NumberScale.Log1p), new NumberFeature("daysAhead", NumberScale.Log1p), new NumberFeature("passengers", NumberScale.None),
                new CategoryFeature(["country"]), new CategoryFeature(["channel"]), new CategoryFeature(["route"]), new CategoryFeature(["vehicle"]),
                new CategoryFeature(["gift"]), new CategoryFeature(["country", "channel"]), new TimeCycleFeature(24L * 3600 * 1_000_000, "1d"),
            ],
            Learning = new LearningOptions { Bank = [.. new[] { 0.01, 0.03, 0.1, 0.3 }.Select(step => new SgdSetting(step, 0, 1e-6))] },
        },
        Kafka = new KafkaOptions { Servers = servers },
        Source = new KafkaSourceOptions { Topics = [Events], Group = group, Instance = "main", UntilEnd = true },
        Scores = new TopicOutputOptions(Scores) { IsExactlyOnce = isExactlyOnce, Properties = ImmutableSortedDictionary<string, string>.Empty },
        State = new StateOptions(stateFolder),
        EffectiveJson = "{}",
    };
}
