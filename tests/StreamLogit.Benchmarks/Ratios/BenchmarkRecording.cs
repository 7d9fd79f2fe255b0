using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Scenarios;
using StreamLogit.Tests;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>A recording of a demo scenario at the rate of a busy stream, and the demo definition that it suits.</summary>
/// <param name="Lines">JSON Lines.</param>
/// <param name="Definition">What is computed.</param>
internal sealed record BenchmarkRecording(byte[] Lines, EngineDefinition Definition)
{
    public const int Records = 1_000_000;

    /// <summary>Payments, 700 a minute, each with its label in its own record.</summary>
    public static BenchmarkRecording LabelsInEvents()
    {
        var lines = new StringBuilder();
        int events = 0;
        // Their labels come after days; what a label says makes no difference to the time it takes.
        foreach (string line in Generate("ferry-tickets", eventsPerDay: 1_000_000))
            if (!line.Contains("\"label\"", StringComparison.Ordinal)) lines.Append(line[..^1]).Append(events++ % 100 == 0 ? ",\"label\":\"stolen\"}\n" : ",\"label\":\"paid\"}\n");
        return new BenchmarkRecording(Encoding.UTF8.GetBytes(lines.ToString()), DemoDefinition("ferry-tickets"));
    }

    /// <summary>Readings of pumps, 14 a minute, and their labels, which come as records of their own within a day.</summary>
    public static BenchmarkRecording LateLabels() => new(
        Encoding.UTF8.GetBytes(string.Concat(Generate("pump-stations", eventsPerDay: 20_000).Select(line => line + "\n"))), DemoDefinition("pump-stations"));

    private static string[] Generate(string scenario, int eventsPerDay)
    {
        using var bytes = new MemoryStream();
        ScenarioCatalog.Create(scenario, new ScenarioOptions { Records = Records, EventsPerDay = eventsPerDay }).Write(bytes);
        return Encoding.UTF8.GetString(bytes.ToArray()).Split('\n', StringSplitOptions.RemoveEmptyEntries);
    }

    private static EngineDefinition DemoDefinition(string name) => StreamDefinitionReader.ReadFile(RepositoryFiles.At("demo-streams", name + ".json")).Engine;
}
