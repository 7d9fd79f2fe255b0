using System.Text.Json;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>
/// The replay of JSON Lines on one thread: lines found, records decoded, features encoded, scored, learned, health counted.
/// Against Utf8JsonReader reading all tokens of the same bytes and doing nothing with them.
/// </summary>
internal static class ReplayRatios
{
    private static readonly Lazy<BenchmarkRecording> Labelled = new(BenchmarkRecording.LabelsInEvents);
    private static readonly Lazy<BenchmarkRecording> Late = new(BenchmarkRecording.LateLabels);

    public static double LabelsInEventsAgainstTokens() => OneSettingAgainstTokens(Labelled.Value);

    public static double LateLabelsAgainstTokens() => OneSettingAgainstTokens(Late.Value);

    public static double SixteenSettingsAgainstOne() => Pairs.LeastRatio(() => Replay(Late.Value, settings: 16), () => Replay(Late.Value, settings: 1));

    /// <summary>What the last third of a recording allocates, when all buffers have grown to their working size.</summary>
    public static double AllocatedBytesPerEvent()
    {
        byte[] lines = Labelled.Value.Lines;
        int lastThird = lines.Length / 3 * 2;
        lastThird += lines.AsSpan(lastThird).IndexOf((byte)'\n') + 1;
        var replay = new OneThreadReplay(WithSettings(Labelled.Value.Definition, 16));
        replay.Run(lines.AsSpan(0, lastThird));
        long before = GC.GetAllocatedBytesForCurrentThread();
        replay.Run(lines.AsSpan(lastThird));
        long allocated = GC.GetAllocatedBytesForCurrentThread() - before;
        replay.CheckAllUsed();
        return allocated / (BenchmarkRecording.Records / 3.0);
    }

    private static double OneSettingAgainstTokens(BenchmarkRecording recording) =>
        1 / Pairs.LeastRatio(() => Replay(recording, settings: 1), () => ReadTokens(recording.Lines));

    private static void Replay(BenchmarkRecording recording, int settings)
    {
        var replay = new OneThreadReplay(WithSettings(recording.Definition, settings));
        replay.Run(recording.Lines);
        replay.CheckAllUsed();
    }

    private static void ReadTokens(ReadOnlySpan<byte> rest)
    {
        while (rest.Length > 0)
        {
            int end = rest.IndexOf((byte)'\n');
            var reader = new Utf8JsonReader(rest[..end]);
            while (reader.Read()) { }
            rest = rest[(end + 1)..];
        }
    }

    // Slices have a row of their own in the table.
    private static EngineDefinition WithSettings(EngineDefinition definition, int settings) => definition with
    {
        Health = definition.Health with { Slices = [], Alarms = [] },
        Learning = definition.Learning with { Bank = [.. Enumerable.Range(0, settings).Select(i => new SgdSetting(0.003 * (i + 1), 0, 1e-6))] },
    };
}
