using System.Globalization;
using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Tests.Contracts;

/// <summary>A seeded stream of card payments, with labels that come late or never, labelled events, garbage, and lines that are too long.</summary>
internal static class LoopStream
{
    public const int MaximumBytes = 400;

    public static EngineDefinition Engine { get; } = new()
    {
        Stream = "quay",
        Record = new RecordOptions { MaximumBytes = MaximumBytes },
        Features =
        [
            new NumberFeature("amount", NumberScale.Standard),
            new CategoryFeature(["country"]),
            new CategoryFeature(["country", "channel"]) { ForgetHalfLifeMicroseconds = 1_800_000_000 },
            new TimeCycleFeature(86_400_000_000, "1d"),
            new HistoryFeature(HistoryKind.Count, ["card"]) { HalfLifeMicroseconds = 600_000_000, Span = "10m", ForgetHalfLifeMicroseconds = 300_000_000 },
            new HistoryFeature(HistoryKind.Distinct, ["card"]) { Of = "country", HalfLifeMicroseconds = 600_000_000, Span = "10m" },
            new HistoryFeature(HistoryKind.Rate, ["card"]) { HalfLifeMicroseconds = 3_600_000_000, Span = "1h" },
            new HistoryFeature(HistoryKind.New, ["card"]) { Of = "country", WithinMicroseconds = 600_000_000, Span = "10m" },
        ],
        // Less than there are cards, so that some are put out and come back.
        Histories = new HistoryOptions { MemoryBytes = 1 },
        Learning = new LearningOptions { Slots = 1024 },
        Labels = new LabelOptions { WaitMicroseconds = 3600L * 1_000_000, EarlyMicroseconds = 60_000_000 },
        Decision = new DecisionOptions { Cutoff = 0.3 },
    };

    /// <summary>A run over the files of a definition.</summary>
    public static StreamRun Open(StreamDefinition definition, LoopOptions options, TimeProvider time) =>
        new(definition, StreamEnds.OfFiles(definition, time), options, time);

    /// <summary>A definition whose source, outputs and state lie in a folder.</summary>
    public static StreamDefinition Definition(TemporaryFolder folder, int commitEvery = 100) => new()
    {
        Engine = Engine,
        Source = new FileSourceOptions(folder["quay.jsonl"], RecordingFormat.JsonLines),
        Scores = new FileOutputOptions(folder["scores.jsonl"]),
        Rejects = new FileOutputOptions(folder["rejects.jsonl"]),
        State = new StateOptions(folder["state"], commitEvery, TimeSpan.FromHours(1)),
        EffectiveJson = "{}",
    };

    /// <summary>That many lines, one record a second of the stream's time.</summary>
    public static byte[] Create(int lines) => Create(lines, kinds: 40);

    /// <summary>The same without a line that is a reject.</summary>
    public static byte[] CreateClean(int lines) => Create(lines, kinds: 0);

    private static byte[] Create(int lines, int kinds)
    {
        var random = new Random(1);
        var cards = new Random(2);
        var text = new StringBuilder();
        var labels = new PriorityQueue<string, int>();
        for (int i = 0; i < lines; i++)
        {
            string time = DateTime.UnixEpoch.AddDays(20_000).AddSeconds(i).ToString("yyyy-MM-ddTHH:mm:ssZ", CultureInfo.InvariantCulture);
            if (labels.TryPeek(out string? id, out int due) && due <= i)
            {
                labels.Dequeue();
                text.Append(CultureInfo.InvariantCulture, $$"""{"id":"{{id}}","time":"{{time}}","label":{{id.Sum(character => character) % 4 / 3}}}""");
            }
            else
            {
                switch (kinds == 0 ? -1 : random.Next(kinds))
                {
                    case 0: text.Append("garbage ").Append('\u00ff'); break;
                    case 1: text.Append('x', MaximumBytes + random.Next(2000)); break;
                    case 2: break;
                    case 3: text.Append(CultureInfo.InvariantCulture, $$"""{"id":"t-nobody-{{i}}","time":"{{time}}","label":1}"""); break;
                    default:
                        string fields = $"\"amount\":{random.Next(100_000) / 100.0},\"country\":\"c{random.Next(20)}\",\"channel\":\"{(random.Next(3) == 0 ? "web" : "desk")}\",\"card\":\"k{cards.Next(900)}\"";
                        bool isLabelled = random.Next(4) == 0;
                        text.Append(CultureInfo.InvariantCulture, $$"""{"id":"t-{{i}}","time":"{{time}}",{{fields}}{{(isLabelled ? $",\"label\":{random.Next(2)}" : "")}}}""");
                        if (!isLabelled && random.Next(5) > 0) labels.Enqueue($"t-{i}", i + random.Next(1, 2000));
                        break;
                }
            }
            text.Append('\n');
        }
        return Encoding.Latin1.GetBytes(text.ToString());
    }
}
