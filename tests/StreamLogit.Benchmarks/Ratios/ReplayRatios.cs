using System.Text.Json;
using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Scenarios;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>
/// The replay of JSON Lines on one thread: lines found, records decoded, features encoded, scored, learned, health counted.
/// Against Utf8JsonReader reading all tokens of the same bytes and doing nothing with them.
/// </summary>
internal static class ReplayRatios
{
    // The rate of the scenario itself: events and, as separate records, their labels 2 to 30 days later.
    private const int Records = 300_000;
    private static readonly byte[] Recording = Generate();

    public static double OneSettingAgainstTokens() => 1 / Pairs.MedianRatio(() => Replay(settings: 1), ReadTokens);

    public static double SixteenSettingsAgainstOne() => Pairs.MedianRatio(() => Replay(settings: 16), () => Replay(settings: 1));

    /// <summary>What the last third of the recording allocates, when all buffers have grown to their working size.</summary>
    public static double AllocatedBytesPerEvent()
    {
        int lastThird = Recording.Length / 3 * 2;
        lastThird += Recording.AsSpan(lastThird).IndexOf((byte)'\n') + 1;
        var replay = new OneThreadReplay(DefinitionOf(16));
        replay.Run(Recording.AsSpan(0, lastThird));
        long before = GC.GetAllocatedBytesForCurrentThread();
        replay.Run(Recording.AsSpan(lastThird));
        long allocated = GC.GetAllocatedBytesForCurrentThread() - before;
        replay.CheckAllUsed();
        return allocated / (Records / 3.0);
    }

    private static void Replay(int settings)
    {
        var replay = new OneThreadReplay(DefinitionOf(settings));
        replay.Run(Recording);
        replay.CheckAllUsed();
    }

    private static void ReadTokens()
    {
        var rest = Recording.AsSpan();
        while (rest.Length > 0)
        {
            int end = rest.IndexOf((byte)'\n');
            var reader = new Utf8JsonReader(rest[..end]);
            while (reader.Read()) { }
            rest = rest[(end + 1)..];
        }
    }

    private static byte[] Generate()
    {
        using var bytes = new MemoryStream();
        ScenarioCatalog.Create("ferry-tickets", new ScenarioOptions { Records = Records }).Write(bytes);
        return bytes.ToArray();
    }

    private static EngineDefinition DefinitionOf(int settings) => new()
    {
        Stream = "ferry-tickets",
        Record = new RecordOptions { LabelValues = new RecordOptions().LabelValues.Clear().Add("stolen", 1).Add("paid", 0) },
        Features =
        [
            new NumberFeature("price", NumberScale.Log1p), new NumberFeature("daysAhead", NumberScale.Log1p), new NumberFeature("passengers", NumberScale.None),
            new CategoryFeature(["country"]), new CategoryFeature(["channel"]), new CategoryFeature(["route"]), new CategoryFeature(["vehicle"]),
            new CategoryFeature(["gift"]), new CategoryFeature(["country", "channel"]), new TimeCycleFeature(24L * 3600 * 1_000_000, "1d"),
        ],
        Learning = new LearningOptions
        {
            Bank = [.. Enumerable.Range(0, settings).Select(i => new SgdSetting(0.003 * (i + 1), 0, 1e-6))],
        },
        Labels = new LabelOptions { WaitMicroseconds = 31L * 24 * 3600 * 1_000_000 },
    };
}
