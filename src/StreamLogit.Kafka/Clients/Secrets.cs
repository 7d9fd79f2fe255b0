using System.Collections.Immutable;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Kafka.Clients;

/// <summary>Reads secrets from the environment and from files.</summary>
internal static class Secrets
{
    /// <summary>The values, by the names of their properties.</summary>
    /// <exception cref="KafkaSettingsException">Some are not there; all of them are named.</exception>
    public static ImmutableSortedDictionary<string, string> Read(ImmutableSortedDictionary<string, SecretPlace> places)
    {
        var values = ImmutableSortedDictionary.CreateBuilder<string, string>(StringComparer.Ordinal);
        var errors = new List<string>();
        foreach (var (name, place) in places)
        {
            if (place.IsFile) ReadFile(name, place.Name);
            else if (Environment.GetEnvironmentVariable(place.Name) is { Length: > 0 } value) values[name] = value;
            else errors.Add($"kafka.secrets: {name}: the environment variable {place.Name} is not set");
        }
        if (errors.Count > 0) throw new KafkaSettingsException(string.Join('\n', errors));
        return values.ToImmutable();

        void ReadFile(string name, string path)
        {
            try
            {
                string value = File.ReadAllText(path).TrimEnd('\r', '\n');
                if (value.Length > 0) values[name] = value;
                else errors.Add($"kafka.secrets: {name}: the file {path} is empty");
            }
            catch (Exception e) when (e is IOException or UnauthorizedAccessException)
            {
                errors.Add($"kafka.secrets: {name}: the file {path} cannot be read");
            }
        }
    }
}
