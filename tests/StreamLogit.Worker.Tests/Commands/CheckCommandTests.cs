using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class CheckCommandTests
{
    [Theory]
    [InlineData("ferry-tickets", "country & channel", "sgd step=0.3")]
    [InlineData("pump-stations", "bearing.vibration", "sgd step=0.003")]
    public void Check_DemoDefinition_NamesItsFeaturesAndSettings(string stream, string feature, string setting)
    {
        var result = StreamLogitProcess.Run("check", DemoStreams.File($"{stream}.json"));

        Assert.Equal(0, result.ExitCode);
        Assert.Empty(result.Errors);
        Assert.StartsWith($"Stream: {stream}\n", result.Output, StringComparison.Ordinal);
        Assert.Contains($"\n  {feature}: ", result.Output, StringComparison.Ordinal);
        Assert.Contains($"\n  setting: {setting} ", result.Output, StringComparison.Ordinal);
        Assert.Contains("KiB for the coefficients", result.Output, StringComparison.Ordinal);
    }

    [Fact]
    public void Check_Set_OverridesTheDefinition()
    {
        var result = StreamLogitProcess.Run("check", DemoStreams.File("ferry-tickets.json"), "--set", "labels.wait=3d", "--set", "decision.cutoff=0.75");

        Assert.Equal(0, result.ExitCode);
        Assert.Contains("an event waits 3d", result.Output, StringComparison.Ordinal);
        Assert.Contains("alert from probability 0.75", result.Output, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("http://127.0.0.1:7070", "health at http://127.0.0.1:7070; asks for no key, as only this machine can reach it")]
    [InlineData("{\"url\":\"http://[::]:80\",\"hosts\":[\"a.example\"],\"keyVariable\":\"PAGE_KEY\"}", "health at http://[::]:80, also as a.example; asks for the key in the environment variable PAGE_KEY")]
    public void Check_Listen_SaysWhereThePageIsAndWhoSeesIt(string listen, string expected)
    {
        var result = StreamLogitProcess.Run("check", DemoStreams.File("ferry-tickets.json"), "--set", $"listen={listen}");

        Assert.Contains($"\n  {expected}\n", result.Output, StringComparison.Ordinal);
    }

    [Fact]
    public void Check_FeatureThatForgets_IsSaidInWords()
    {
        using var folder = new TemporaryFolder();
        string path = folder.Write("quay.json", """{ "stream": "quay", "features": [ { "number": "amount" }, { "category": "country", "forget": "36h" } ] }""");

        var result = StreamLogitProcess.Run("check", path);

        Assert.Equal(0, result.ExitCode);
        Assert.Contains("\n  country: a coefficient for every value, \"missing\" among them; what is learned of it fades to half in 36h\n", result.Output, StringComparison.Ordinal);
        Assert.Contains("\n  amount: a number as it is; a coefficient of its own where it is missing\n", result.Output, StringComparison.Ordinal);
    }

    [Fact]
    public void Check_EnvironmentVariable_OverridesTheDefinitionButNotSet()
    {
        var result = StreamLogitProcess.RunWith(
            [("STREAMLOGIT__labels__wait", "3d"), ("STREAMLOGIT__decision__cutoff", "0.5")],
            "check", DemoStreams.File("ferry-tickets.json"), "--set", "decision.cutoff=0.75");

        Assert.Contains("an event waits 3d", result.Output, StringComparison.Ordinal);
        Assert.Contains("alert from probability 0.75", result.Output, StringComparison.Ordinal);
    }

    [Fact]
    public void Check_WrongDefinition_SaysAllErrorsWithTheirPlaces()
    {
        using var folder = new TemporaryFolder();
        string path = folder.Write("wrong.json", """
            {
              "stream": "x",
              "features": [ { "number": "a", "scale": "log2" } ],
              "lerning": {}
            }
            """);

        var result = StreamLogitProcess.Run("check", path, "--set", "labels.wait=soon");

        Assert.Equal(2, result.ExitCode);
        Assert.Empty(result.Output);
        Assert.Contains($"{path}:3:", result.Errors, StringComparison.Ordinal);
        Assert.Contains($"{path}:4:", result.Errors, StringComparison.Ordinal);
        Assert.Contains("--set labels.wait=soon", result.Errors, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("no-such-file.json")]
    [InlineData("/")]
    public void Check_NoFile_ExitsWith2(string path)
    {
        var result = StreamLogitProcess.Run("check", path);

        Assert.Equal(2, result.ExitCode);
        Assert.Contains(path, result.Errors, StringComparison.Ordinal);
    }

    [Fact]
    public void Check_Garbage_ExitsWith2()
    {
        using var folder = new TemporaryFolder();
        byte[] garbage = new byte[4096];
        new Random(11).NextBytes(garbage);
        File.WriteAllBytes(folder["garbage.json"], garbage);

        var result = StreamLogitProcess.Run("check", folder["garbage.json"]);

        Assert.Equal(2, result.ExitCode);
        Assert.DoesNotContain("   at ", result.Errors, StringComparison.Ordinal);
    }
}
