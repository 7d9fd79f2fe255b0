using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class FitCommandTests : IDisposable
{
    private static readonly string Recording = DemoStreams.File("pump-stations.jsonl");
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Fit_ThenReplay_StartsFromTheCoefficients()
    {
        string[] set = ["--set", $"learning.warmStart={_folder["fit.json"]}"];
        string definition = DemoStreams.File("pump-stations.json");
        var fit = StreamLogitProcess.Run(["fit", definition, Recording, .. set]);

        Assert.Equal(0, fit.ExitCode);
        var table = fit.Table("feature");
        Assert.Equal(["feature", "estimate", "standard error", "z", "p"], table[0]);
        Assert.Equal("intercept", table[1][0]);
        Assert.Contains(table, row => row[0] == "bearing.vibration");
        Assert.Equal("converged", fit.Table("fit").Single(row => row[0] == "outcome")[1]);

        // Every pump belongs to one station, so some coefficients cannot be told apart.
        Assert.Contains("is determined by other columns", fit.Errors, StringComparison.Ordinal);
        Assert.Contains($"Coefficients: {_folder["fit.json"]}", fit.Errors, StringComparison.Ordinal);

        double cold = LogLoss(StreamLogitProcess.Run("replay", definition, Recording, "--json"));
        double warm = LogLoss(StreamLogitProcess.Run(["replay", definition, Recording, "--json", .. set]));
        Assert.True(warm < cold - 0.005, $"{warm} after {cold}");
    }

    [Fact]
    public void Fit_Penalty_WritesJsonAndTheFile()
    {
        string path = _folder["tickets.json"];
        var fit = StreamLogitProcess.Run(
            "fit", DemoStreams.File("ferry-tickets.json"), DemoStreams.File("ferry-tickets.jsonl"), "--l2", "1", "--out", path, "--json");

        Assert.Equal(0, fit.ExitCode);
        Assert.Equal("L2 penalty", fit.Json.GetProperty("method").GetString());
        Assert.Equal("converged", fit.Json.GetProperty("outcome").GetString());
        Assert.InRange(fit.Json.GetProperty("deviance").GetDouble(), 1, fit.Json.GetProperty("baseRateDeviance").GetDouble());
        Assert.Equal("intercept", fit.Json.GetProperty("coefficients")[0].GetProperty("feature").GetString());
        Assert.True(File.Exists(path));
    }

    [Theory]
    [InlineData("DOTNET_EnableAVX512")]
    [InlineData("DOTNET_EnableAVX2")]
    [InlineData("DOTNET_EnableHWIntrinsic")]
    public void Fit_InstructionsOff_GivesTheSameBits(string variable)
    {
        foreach (string[] method in (string[][])[[], ["--l2", "1"]])
        {
            string[] arguments = ["fit", DemoStreams.File("pump-stations.json"), Recording, "--json", .. method];
            var without = StreamLogitProcess.RunWith([(variable, "0")], arguments);

            Assert.Equal(0, without.ExitCode);
            Assert.Equal(StreamLogitProcess.Run(arguments).Output, without.Output);
        }
    }

    [Fact]
    public void Fit_OneClass_FailsAndStoresNothing()
    {
        string recording = _folder["one.jsonl"], path = _folder["fit.json"];
        File.WriteAllText(recording, """{"id":"1","time":"2026-03-01T00:00:00Z","speed":1,"label":0}""" + "\n");
        var fit = StreamLogitProcess.Run("fit", DemoStreams.File("pump-stations.json"), recording, "--out", path, "--set", "record.labelValues={\"0\":0,\"1\":1}");

        Assert.Equal(1, fit.ExitCode);
        Assert.Contains("All 1 rows have label 0", fit.Errors, StringComparison.Ordinal);
        Assert.False(File.Exists(path));
    }

    [Fact]
    public void Replay_WarmStartOfOtherFeatures_IsWrongInput()
    {
        string path = _folder["fit.json"];
        Assert.Equal(0, StreamLogitProcess.Run("fit", DemoStreams.File("pump-stations.json"), Recording, "--l2", "1", "--out", path).ExitCode);
        var replay = StreamLogitProcess.Run(
            "replay", DemoStreams.File("pump-stations.json"), Recording, "--set", $"learning.warmStart={path}", "--set", "learning.slots=64");

        Assert.Equal(2, replay.ExitCode);
        Assert.Contains("fit it again with this definition", replay.Errors, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("0")]
    [InlineData("-1")]
    [InlineData("much")]
    public void Fit_PenaltyOutOfRange_IsWrongInput(string penalty)
    {
        var fit = StreamLogitProcess.Run("fit", DemoStreams.File("pump-stations.json"), Recording, "--l2", penalty);

        Assert.Equal(2, fit.ExitCode);
        Assert.Contains("--l2 takes a number above 0", fit.Errors, StringComparison.Ordinal);
    }

    private static double LogLoss(ProgramResult replay) => replay.Json.GetProperty("published").GetProperty("logLoss").GetDouble();
}
