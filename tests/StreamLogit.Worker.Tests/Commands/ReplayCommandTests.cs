using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class ReplayCommandTests
{
    private static readonly string Definition = DemoStreams.File("pump-stations.json");
    private static readonly string Recording = DemoStreams.File("pump-stations.jsonl");
    private static readonly Lazy<ProgramResult> Demo = new(() => StreamLogitProcess.Run("replay", Definition, Recording, "--json"));

    [Fact]
    public void Replay_Json_HasTheseMembers()
    {
        var json = Demo.Value.Json;

        Assert.Equal(
            ["events", "labelled", "rejected", "awaiting", "optimistic", "published", "settings", "health", "scoreHash"],
            json.EnumerateObject().Select(member => member.Name));
        Assert.Equal(["logLoss", "baseRateLogLoss", "brier"], json.GetProperty("published").EnumerateObject().Select(member => member.Name));
        Assert.Equal(4, json.GetProperty("settings").GetArrayLength());
        Assert.All(json.GetProperty("settings").EnumerateArray(), setting =>
            Assert.Equal(["name", "logLoss", "brier"], setting.EnumerateObject().Select(member => member.Name)));
        Assert.Equal("sgd step=0.003 stepDecay=0 weightDecay=1E-06", json.GetProperty("settings")[0].GetProperty("name").GetString());
        Assert.Matches("^[0-9a-f]{64}$", json.GetProperty("scoreHash").GetString());
        Assert.Equal(20_000, json.GetProperty("events").GetInt32() + json.GetProperty("labelled").GetInt32());
        Assert.Equal(0, json.GetProperty("rejected").GetInt32());
    }

    [Fact]
    public void Replay_BaseRate_IsThatOfTheGenerator()
    {
        var json = Demo.Value.Json;
        var truth = StreamLogitProcess.Run("synth", "pump-stations", "--truth").Errors.Split('\n')
            .Where(line => line.Contains('\t', StringComparison.Ordinal)).ToDictionary(line => line.Split('\t')[0], line => line.Split('\t')[1]);

        double published = json.GetProperty("published").GetProperty("logLoss").GetDouble();
        Assert.Equal(double.Parse(truth["log-loss of the base rate"]), json.GetProperty("published").GetProperty("baseRateLogLoss").GetDouble(), 1e-5);
        Assert.InRange(published, double.Parse(truth["log-loss of the true probabilities"]), double.Parse(truth["log-loss of the base rate"]));
    }

    [Theory]
    [InlineData("ferry-tickets")]
    [InlineData("pump-stations")]
    public void Replay_DemoStream_GivesTheFiguresOfTheDemoPage(string stream)
    {
        string[] row = File.ReadLines(DemoStreams.File("README.md"))
            .First(line => line.StartsWith($"| {stream} | 20000 |", StringComparison.Ordinal)).Split('|', StringSplitOptions.TrimEntries)[1..^1];

        var json = StreamLogitProcess.Run("replay", DemoStreams.File($"{stream}.json"), DemoStreams.File($"{stream}.jsonl"), "--json").Json;

        Assert.Equal((row[3], row[4]), ($"{json.GetProperty("events").GetInt32()}", $"{json.GetProperty("labelled").GetInt32()}"));
        Assert.Equal(double.Parse(row[7]), json.GetProperty("published").GetProperty("logLoss").GetDouble(), 5e-5);
        Assert.Equal(double.Parse(row[8]), json.GetProperty("published").GetProperty("baseRateLogLoss").GetDouble(), 5e-5);
    }

    [Theory]
    [InlineData("DOTNET_EnableAVX512", "pump-stations")]
    [InlineData("DOTNET_EnableAVX2", "pump-stations")]
    [InlineData("DOTNET_EnableHWIntrinsic", "pump-stations")]
    [InlineData("DOTNET_EnableAVX512", "ferry-tickets")]
    [InlineData("DOTNET_EnableAVX2", "ferry-tickets")]
    [InlineData("DOTNET_EnableHWIntrinsic", "ferry-tickets")]
    public void Replay_InstructionsOff_GivesTheSameBits(string variable, string stream)
    {
        string[] arguments = ["replay", DemoStreams.File($"{stream}.json"), DemoStreams.File($"{stream}.jsonl"), "--json"];

        var usual = StreamLogitProcess.Run(arguments);
        var without = StreamLogitProcess.RunWith([(variable, "0")], arguments);

        Assert.Equal(0, without.ExitCode);
        Assert.Equal(usual.Output, without.Output);
    }

    [Fact]
    public void Replay_SplitRecordings_GiveTheSameHash()
    {
        using var folder = new TemporaryFolder();
        string[] lines = File.ReadAllLines(Recording);
        File.WriteAllLines(folder["a.jsonl"], lines[..7_777]);
        File.WriteAllLines(folder["b.jsonl"], lines[7_777..]);

        var whole = Demo.Value.Json;
        var split = StreamLogitProcess.Run("replay", Definition, folder["a.jsonl"], folder["b.jsonl"], "--json").Json;
        var piped = StreamLogitProcess.RunOn(File.ReadAllBytes(Recording), "replay", Definition, "-", "--format", "jsonl", "--json").Json;

        Assert.Equal(whole.GetProperty("scoreHash").GetString(), split.GetProperty("scoreHash").GetString());
        Assert.Equal(whole.GetProperty("scoreHash").GetString(), piped.GetProperty("scoreHash").GetString());
    }

    [Fact]
    public void Replay_Tables_AreTabSeparatedAndPlain()
    {
        var result = StreamLogitProcess.Run("replay", Definition, Recording);

        Assert.Equal(0, result.ExitCode);
        Assert.Empty(result.Errors);
        Assert.DoesNotContain('\u001b', result.Output);
        Assert.Equal(["counted", "number"], result.Table("counted")[0]);
        Assert.Equal(5, result.Table("setting").Count);
        Assert.Equal("scores", result.Table("hash")[1][0]);
        Assert.All(result.Table("window"), row => Assert.Equal(7, row.Length));
    }

    [Fact]
    public void Replay_Csv_IsReadByItsHeader()
    {
        using var folder = new TemporaryFolder();
        string definition = folder.Write("definition.json", """{ "stream": "s", "features": [ { "number": "x" } ] }""");
        string csv = folder.Write("recording.csv", "id,time,x,label\na,2026-01-01T00:00:00Z,1.5,1\nb,2026-01-01T00:00:01Z,-2,0\nc,never,1,0\n");

        var json = StreamLogitProcess.Run("replay", definition, csv, "--json").Json;

        Assert.Equal((2, 2, 1), (json.GetProperty("events").GetInt32(), json.GetProperty("labelled").GetInt32(), json.GetProperty("rejected").GetInt32()));
    }

    private const string LabelledEvents = """
        {"id":"a","time":"2026-01-01T00:00:00Z","x":1,"label":1,"settled":"2026-01-01T12:00:00Z"}
        {"id":"b","time":"2026-01-01T06:00:00Z","x":1,"label":0}
        {"id":"c","time":"2026-01-02T06:00:00Z","x":1}

        """;

    private static System.Text.Json.JsonElement ReplayLabelled(TemporaryFolder folder, out string errors, params string[] options)
    {
        string definition = folder.Write("definition.json", """{ "stream": "s", "features": [ { "number": "x" } ] }""");
        string recording = folder.Write("recording.jsonl", LabelledEvents);
        var result = StreamLogitProcess.Run(["replay", definition, recording, "--json", .. options]);
        errors = result.Errors;
        return result.Json;
    }

    [Fact]
    public void Replay_LabelsWithoutTheirTimes_IsOptimisticUnlessTheyAreDelayed()
    {
        using var folder = new TemporaryFolder();
        var atOnce = ReplayLabelled(folder, out string caution);
        var delayed = ReplayLabelled(folder, out string noCaution, "--label-delay", "12h");
        var timed = ReplayLabelled(folder, out string caution1, "--set", "record.labelTime=settled");

        Assert.True(atOnce.GetProperty("optimistic").GetBoolean());
        Assert.Contains("2 labels stand in their events", caution, StringComparison.Ordinal);
        Assert.False(delayed.GetProperty("optimistic").GetBoolean());
        Assert.Empty(noCaution);
        Assert.Contains("1 labels stand in their events", caution1, StringComparison.Ordinal);
        string[] hashes = [.. new[] { atOnce, delayed, timed }.Select(json => json.GetProperty("scoreHash").GetString()!)];
        Assert.Equal(3, hashes.Distinct().Count());
    }

    [Fact]
    public void Replay_FromTo_TakesTheRecordsBetween()
    {
        using var folder = new TemporaryFolder();

        Assert.Equal(1, ReplayLabelled(folder, out _, "--from", "2026-01-01T06:00:00Z", "--to", "2026-01-02").GetProperty("events").GetInt32());
        Assert.Equal(2, ReplayLabelled(folder, out _, "--from", "2026-01-01T07:00:00+01:00").GetProperty("events").GetInt32());
        Assert.Equal(2, StreamLogitProcess.Run("replay", folder["definition.json"], folder["recording.jsonl"], "--from", "2026-01-02", "--to", "2026-01-02").ExitCode);
        Assert.Equal(2, StreamLogitProcess.Run("replay", folder["definition.json"], folder["recording.jsonl"], "--from", "yesterday").ExitCode);
    }

    [Fact]
    public void Replay_NoLabels_HasNullFigures()
    {
        using var folder = new TemporaryFolder();
        string recording = folder.Write("one.jsonl", """{"id":"a","time":"2026-01-01T00:00:00Z"}""");

        var json = StreamLogitProcess.Run("replay", Definition, recording, "--json").Json;

        Assert.Equal(System.Text.Json.JsonValueKind.Null, json.GetProperty("published").GetProperty("logLoss").ValueKind);
        Assert.Equal(1, json.GetProperty("awaiting").GetInt32());
    }

    [Theory]
    [InlineData("no-such-recording.jsonl", "does not exist")]
    [InlineData("recording.xlsx", "--format")]
    [InlineData("recording.parquet", "does not exist")]
    [InlineData("nowhere/", "does not exist")]
    [InlineData("", "argument")]
    public void Replay_WrongRecording_ExitsWith2(string recording, string said)
    {
        var result = StreamLogitProcess.Run(["replay", Definition, .. recording.Split(' ', StringSplitOptions.RemoveEmptyEntries)]);

        Assert.Equal(2, result.ExitCode);
        Assert.Empty(result.Output);
        Assert.Contains(said, result.Errors, StringComparison.Ordinal);
        Assert.DoesNotContain("   at ", result.Errors, StringComparison.Ordinal);
    }
}
