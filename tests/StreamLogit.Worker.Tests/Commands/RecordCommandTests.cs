using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class RecordCommandTests
{
    private static readonly string Definition = DemoStreams.File("ferry-tickets.json");
    private static readonly string Recording = DemoStreams.File("ferry-tickets.jsonl");

    private static string? HashOf(params string[] recordings) =>
        StreamLogitProcess.Run(["replay", Definition, .. recordings, "--json"]).Json.GetProperty("scoreHash").GetString();

    [Fact]
    public void Record_ADemoStream_IsReplayedToTheSameHash()
    {
        using var folder = new TemporaryFolder();
        string set = $"source.file={Recording}";
        var result = StreamLogitProcess.Run("record", Definition, "--out", folder["recorded"], "--set", set);
        var again = StreamLogitProcess.Run("record", Definition, "--out", folder["recorded"], "--set", set);

        Assert.Equal(0, result.ExitCode);
        Assert.True(Directory.GetFiles(folder["recorded"]).Length > 1);
        string? hash = HashOf(Recording);
        Assert.Equal(hash, HashOf(folder["recorded"]));
        Assert.Equal(hash, HashOf(folder["recorded/*.jsonl.zst"]));
        Assert.Equal(1, again.ExitCode);
        Assert.Contains("already holds recordings", again.Errors, StringComparison.Ordinal);
    }

    [Fact]
    public void Run_WithARecording_IsReplayedToTheHashOfItsScores()
    {
        using var folder = new TemporaryFolder();
        var run = StreamLogitProcess.Run(
            "run", Definition, "--until-end", "--set", $"source.file={Recording}", "--set", $"scores.file={folder["scores.jsonl"]}",
            "--set", $"rejects.file={folder["rejects.jsonl"]}", "--set", $"state.folder={folder["state"]}", "--set", $"recording.folder={folder["recorded"]}");

        Assert.Equal(0, run.ExitCode);
        Assert.Equal(HashOf(Recording), HashOf(folder["recorded"]));
    }

    [Fact]
    public void Record_NoSource_ExitsWith2()
    {
        using var folder = new TemporaryFolder();
        string definition = folder.Write("definition.json", """{ "stream": "s", "features": [ { "number": "x" } ] }""");

        var result = StreamLogitProcess.Run("record", definition, "--out", folder["recorded"]);

        Assert.Equal(2, result.ExitCode);
        Assert.Contains("no source", result.Errors, StringComparison.Ordinal);
    }
}
