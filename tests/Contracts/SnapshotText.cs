using System.Text.Json;
using System.Text.Json.Serialization;

namespace StreamLogit.Tests.Contracts;

/// <summary>Snapshots as text, with every digit, to be compared.</summary>
internal static class SnapshotText
{
    private static readonly JsonSerializerOptions Options = new()
    {
        WriteIndented = true,
        NumberHandling = JsonNumberHandling.AllowNamedFloatingPointLiterals,
    };

    public static string Of<T>(T snapshot) => JsonSerializer.Serialize(snapshot, Options);
}
