using System.Diagnostics;
using System.Text.Json;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class BacktestCommandTests : IDisposable
{
    private static readonly string Definition = DemoStreams.File("pump-stations.json");
    private static readonly string Recording = DemoStreams.File("pump-stations.jsonl");
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Replay_Vary_GivesTheBitsOfReplaysWithSet()
    {
        var json = StreamLogitProcess.Run(
            "replay", Definition, Recording, "--vary", "learning.switchRate=0,0.01", "--vary", "features[0].scale=none", "--json").Json;

        string[] names = ["learning.switchRate=0, features[0].scale=none", "learning.switchRate=0.01, features[0].scale=none"];
        var variants = json.GetProperty("variants").EnumerateArray().ToList();
        Assert.Equal(names, variants.Select(variant => variant.GetProperty("name").GetString()));
        foreach (var variant in variants)
        {
            string[] sets = [.. variant.GetProperty("name").GetString()!.Split(", ").SelectMany(change => new[] { "--set", change })];
            var alone = StreamLogitProcess.Run(["replay", Definition, Recording, .. sets, "--json"]).Json;
            Assert.Equal(alone.GetProperty("scoreHash").GetString(), variant.GetProperty("scoreHash").GetString());
        }
    }

    [Fact]
    public void Replay_VaryAndJson_BeginsAsAReplayWithoutThem()
    {
        var plain = StreamLogitProcess.Run("replay", Definition, Recording, "--json").Json;
        var varied = StreamLogitProcess.Run("replay", Definition, Recording, "--vary", "learning.switchRate=0", "--baselines", "--json").Json;

        foreach (var member in plain.EnumerateObject())
            Assert.Equal(member.Value.GetRawText(), varied.GetProperty(member.Name).GetRawText());
        Assert.Equal(["base rate", "nightly refit on 30 days"],
            varied.GetProperty("baselines").EnumerateArray().Select(baseline => baseline.GetProperty("name").GetString()));
    }

    [Fact]
    public void Replay_JsonFileAndScores_WritesFilesAndTables()
    {
        var result = StreamLogitProcess.Run(
            "replay", Definition, Recording, "--vary", "decision.cutoff=0.1,0.5", "--json", _folder["result.json"], "--scores", _folder["scores.jsonl"]);

        Assert.Equal(0, result.ExitCode);
        var rows = result.Table("variant");
        Assert.Equal(["variant", "(as it stands)", "decision.cutoff=0.1", "decision.cutoff=0.5"], rows.Select(row => row[0]));
        Assert.Equal(["-", "the same", "the same"], rows.Skip(1).Select(row => row[^1]));
        var json = JsonSerializer.Deserialize<JsonElement>(File.ReadAllBytes(_folder["result.json"]));
        Assert.Equal(json.GetProperty("events").GetInt32(), File.ReadLines(_folder["scores.jsonl"]).Count());
        Assert.True(json.GetProperty("variants")[0].GetProperty("alerts").GetDouble() > json.GetProperty("variants")[1].GetProperty("alerts").GetDouble());
    }

    [Theory]
    [InlineData("--vary learning.slots", "path=value")]
    [InlineData("--vary learning.slots=64 --vary learning.slots=128", "twice")]
    [InlineData("--vary learning.slots=63", "learning.slots")]
    [InlineData("--vary learning.hashSeed=0,1,2,3,4,5,6,7,8,9 --vary decision.cutoff=0,.1,.2,.3,.4,.5,.6,.7,.8,.9,1 --vary scores.reasons=0,1,2,3,4,5,6,7,8,9", "1100")]
    public void Replay_WrongVary_ExitsWith2(string options, string said)
    {
        var result = StreamLogitProcess.Run(["replay", Definition, Recording, .. options.Split(' ')]);

        Assert.Equal((2, ""), (result.ExitCode, result.Output));
        Assert.Contains(said, result.Errors, StringComparison.Ordinal);
    }

    [Fact]
    public void Replay_OutputThatIsAnInput_ExitsWith2AndLeavesItAlone()
    {
        string recording = _folder.Write("recording.jsonl", "{}\n");

        var result = StreamLogitProcess.Run("replay", Definition, recording, "--scores", recording);

        Assert.Equal(2, result.ExitCode);
        Assert.Equal("{}\n", File.ReadAllText(recording));
    }

    [Theory]
    [InlineData()]
    [InlineData("--vary", "learning.switchRate=0")]
    public async Task Replay_Stopped_GivesTheResultSoFarAndExitsWith1(params string[] options)
    {
        // A pipe that never ends: the replay waits for more when it is asked to stop.
        string pipe = _folder["pipe.jsonl"];
        using (var make = Process.Start("mkfifo", [pipe])) make.WaitForExit();
        using var process = StreamLogitProcess.Start(["replay", Definition, pipe, .. options, "--json"]);
        // Opened for reading too, since a pipe without a reader would keep the test waiting for ever.
        using var writer = new FileStream(pipe, FileMode.Open, FileAccess.ReadWrite);
        byte[] records = await File.ReadAllBytesAsync(Recording, TestContext.Current.CancellationToken);
        await Task.Run(() => writer.Write(records), TestContext.Current.CancellationToken)
            .WaitAsync(StreamLogitProcess.Patience, TestContext.Current.CancellationToken);
        process.Terminate();
        var result = process.WaitForEnd();

        Assert.Equal(1, result.ExitCode);
        Assert.Contains("stopped before the end", result.Errors, StringComparison.Ordinal);
        Assert.InRange(result.Json.GetProperty("events").GetInt32(), 1000, 20_000);
    }
}
