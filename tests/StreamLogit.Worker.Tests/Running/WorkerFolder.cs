using System.Buffers.Binary;
using System.Globalization;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json;

namespace StreamLogit.Worker.Tests.Running;

/// <summary>A folder with a recording, and the arguments that run the worker of a demo definition on it with all outputs in the folder.</summary>
internal sealed class WorkerFolder(string definition = "pump-stations") : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public string Definition { get; } = DemoStreams.File($"{definition}.json");

    public string Recording => _folder["recording.jsonl"];

    public string Scores => _folder["scores.jsonl"];

    public string Rejects => _folder["rejects.jsonl"];

    public string State => _folder["state"];

    public string this[string name] => _folder[name];

    /// <summary>Makes the recording of the scenario.</summary>
    public WorkerFolder Synthesize(int records, int seed)
    {
        File.WriteAllBytes(Recording, StreamLogitProcess.Run("synth", definition, "--records", $"{records}", "--seed", $"{seed}").OutputBytes);
        return this;
    }

    /// <summary>Takes the demo stream as the recording.</summary>
    public WorkerFolder Demo()
    {
        File.Copy(DemoStreams.File($"{definition}.jsonl"), Recording);
        return this;
    }

    /// <summary>Arguments of a run that commits after so many records.</summary>
    public string[] RunArguments(int commitEvery, params string[] more) =>
    [
        "run", Definition, "--set", $"source.file={Recording}", "--set", $"scores.file={Scores}", "--set", $"rejects.file={Rejects}",
        "--set", $"state.folder={State}", "--set", $"state.everyEvents={commitEvery}", "--set", "source.format=jsonl", .. more,
    ];

    /// <summary>The score hash of the score file, computed here from its text.</summary>
    public string ScoreHash()
    {
        using var hash = IncrementalHash.CreateHash(HashAlgorithmName.SHA256);
        byte[] bits = new byte[sizeof(double)];
        foreach (string line in File.ReadLines(Scores))
        {
            var score = JsonSerializer.Deserialize<JsonElement>(line);
            hash.AppendData(Encoding.UTF8.GetBytes(score.GetProperty("id").GetString()!));
            BinaryPrimitives.WriteDoubleLittleEndian(bits, double.Parse(score.GetProperty("probability").GetRawText(), CultureInfo.InvariantCulture));
            hash.AppendData(bits);
        }
        return Convert.ToHexStringLower(hash.GetHashAndReset());
    }

    public void Dispose() => _folder.Dispose();
}
