using System.Security.Cryptography;
using System.Text;
using System.Text.Json;

namespace StreamLogit.Pipeline.Tests.Replay;

/// <summary>The score hash, worked out from a score file.</summary>
internal static class ScoreFileHash
{
    public static string Of(string path)
    {
        using var hash = IncrementalHash.CreateHash(HashAlgorithmName.SHA256);
        foreach (string line in File.ReadLines(path))
        {
            using var score = JsonDocument.Parse(line);
            hash.AppendData(Encoding.UTF8.GetBytes(score.RootElement.GetProperty("id").GetString()!));
            hash.AppendData(BitConverter.GetBytes(score.RootElement.GetProperty("probability").GetDouble()));
        }
        return Convert.ToHexStringLower(hash.GetHashAndReset());
    }
}
