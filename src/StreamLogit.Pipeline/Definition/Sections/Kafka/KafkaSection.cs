using System.Collections.Immutable;
using System.Text.Json;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Pipeline.Definition.Sections.Kafka;

/// <summary><c>kafka</c>: the cluster, and how to get at it.</summary>
internal static class KafkaSection
{
    private const long ShortestMicroseconds = 1_000_000;
    private const long LongestMicroseconds = 7L * 24 * 3600 * 1_000_000;

    public static KafkaOptions? Read(ValueReader? value, string folder)
    {
        if (value?.Object() is not { } section) return null;
        string? servers = section.Required("servers", "it names brokers, as \"broker-1:9092,broker-2:9092\"")?.Text();
        var properties = KafkaProperties.Read(section.Optional("properties"));
        var secrets = ReadSecrets(section.Optional("secrets"), folder);
        long? giveUpAfter = section.Optional("giveUpAfter")?.Duration(ShortestMicroseconds, LongestMicroseconds);
        section.End();
        var options = new KafkaOptions { Servers = servers ?? "", Properties = properties, Secrets = secrets };
        return giveUpAfter is { } microseconds ? options with { GiveUpAfter = TimeSpan.FromMicroseconds(microseconds) } : options;
    }

    private static ImmutableSortedDictionary<string, SecretPlace> ReadSecrets(ValueReader? value, string folder)
    {
        var secrets = ImmutableSortedDictionary.CreateBuilder<string, SecretPlace>(StringComparer.Ordinal);
        if (value?.Object() is not { } section) return secrets.ToImmutable();
        foreach (var (name, property) in section.Own())
        {
            if (property.Value.Kind != JsonValueKind.Object)
            {
                // What stands there may be the secret itself.
                property.Error("expected { \"environment\": name } or { \"file\": file }, which say where the secret is found");
                continue;
            }
            if (property.Object() is not { } place || place.Kind("place of a secret", "environment", "file") is not { } kind) continue;
            string? where = kind.Value.Text();
            place.End();
            if (!KafkaProperties.IsSecret(name)) property.Error("is no secret: write it among the properties");
            if (where is not null) secrets[name] = kind.Key == "file" ? new SecretPlace(Path.GetFullPath(where, folder), true) : new SecretPlace(where, false);
        }
        section.End();
        return secrets.ToImmutable();
    }
}
