using System.Collections.Immutable;
using System.Text.Json;

namespace StreamLogit.Pipeline.Definition.Sections.Kafka;

/// <summary>Properties of librdkafka in a definition, by their names. Which of them exist, librdkafka itself says when a client is made.</summary>
internal static class KafkaProperties
{
    private const int Most = 200;

    // What decides how records are read and results written: the worker cannot do without its own values.
    private static readonly string[] Reserved =
    [
        "auto.offset.reset", "bootstrap.servers", "enable.auto.commit", "enable.auto.offset.store", "enable.idempotence", "enable.partition.eof",
        "group.id", "group.instance.id", "isolation.level", "metadata.broker.list", "partition.assignment.strategy", "transactional.id",
    ];

    // Parts of the names of properties that hold secrets.
    private static readonly string[] SecretParts = ["password", "secret", "key.pem", "passphrase", "oauthbearer.config"];

    public static ImmutableSortedDictionary<string, string> Read(ValueReader? value)
    {
        var properties = ImmutableSortedDictionary.CreateBuilder<string, string>(StringComparer.Ordinal);
        if (value?.Object() is not { } section) return properties.ToImmutable();
        foreach (var (name, property) in section.Own())
        {
            if (IsSecret(name)) property.Error("is a secret, and a definition is no place for one: name an environment variable or a file in kafka.secrets");
            else if (IsReserved(name)) property.Error("is set by the program itself: leave it away");
            else if (Text(property) is { } text) properties[name] = text;
        }
        section.End();
        if (properties.Count > Most) section.Error($"expected at most {Most} properties, found {properties.Count}");
        return properties.ToImmutable();
    }

    public static bool IsSecret(string name) => SecretParts.Any(part => name.Contains(part, StringComparison.OrdinalIgnoreCase));

    private static bool IsReserved(string name) => name.StartsWith("dotnet.", StringComparison.Ordinal) || Reserved.Contains(name);

    private static string? Text(ValueReader property)
    {
        switch (property.Value.Kind)
        {
            case JsonValueKind.String or JsonValueKind.Number: return property.Value.Text;
            case JsonValueKind.True: return "true";
            case JsonValueKind.False: return "false";
            default:
                property.Error($"expected a string, a number, true or false, found {property.Value.Describe()}");
                return null;
        }
    }
}
