using System.Text.Json;

namespace StreamLogit.Engine.Tests.Health.Metrics;

/// <summary>The values of reference_health.json. See SOURCES.md beside it.</summary>
internal static class HealthReference
{
    public static JsonElement Root { get; } =
        JsonDocument.Parse(File.ReadAllText(Path.Combine(TestData.Folder, "reference_health.json"))).RootElement;

    public static double[] Numbers(this JsonElement element) => [.. element.EnumerateArray().Select(e => e.GetDouble())];
}
