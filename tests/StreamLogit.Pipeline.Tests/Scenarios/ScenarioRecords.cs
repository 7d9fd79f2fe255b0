using System.Text.Json;
using StreamLogit.Pipeline.Scenarios;

namespace StreamLogit.Pipeline.Tests.Scenarios;

/// <summary>A generated stream, read back.</summary>
internal sealed class ScenarioRecords
{
    private ScenarioRecords(List<JsonElement> all, ScenarioTruth truth)
    {
        All = all;
        Truth = truth;
        Events = [.. all.Where(r => !r.TryGetProperty("label", out _))];
        Labels = all.Where(r => r.TryGetProperty("label", out _)).ToDictionary(r => r.GetProperty("id").GetString()!);
    }

    public List<JsonElement> All { get; }

    public ScenarioTruth Truth { get; }

    public List<JsonElement> Events { get; }

    public Dictionary<string, JsonElement> Labels { get; }

    public static byte[] Bytes(string scenario, ScenarioOptions options)
    {
        using var stream = new MemoryStream();
        ScenarioCatalog.Create(scenario, options).Write(stream);
        return stream.ToArray();
    }

    public static ScenarioRecords Read(string scenario, ScenarioOptions options)
    {
        using var stream = new MemoryStream();
        var writer = ScenarioCatalog.Create(scenario, options);
        writer.Write(stream);
        stream.Position = 0;
        using var reader = new StreamReader(stream);
        var all = new List<JsonElement>();
        while (reader.ReadLine() is { } line) all.Add(JsonSerializer.Deserialize<JsonElement>(line));
        return new ScenarioRecords(all, writer.Truth);
    }

    public static bool IsBad(JsonElement label) => label.GetProperty("label") switch
    {
        { ValueKind: JsonValueKind.String } text => text.GetString() == "stolen",
        var boolean => boolean.GetBoolean(),
    };
}
