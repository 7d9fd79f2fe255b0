using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class HelpTests
{
    [Theory]
    [InlineData("run")]
    [InlineData("replay")]
    [InlineData("fit")]
    [InlineData("check")]
    [InlineData("show")]
    [InlineData("synth")]
    public void Help_EveryCommand_HasAnExample(string command)
    {
        var result = StreamLogitProcess.Run(command, "--help");

        Assert.Equal(0, result.ExitCode);
        Assert.Contains("Example", result.Output, StringComparison.Ordinal);
        Assert.Contains($"\n  streamlogit {command} ", result.Output, StringComparison.Ordinal);
        Assert.Empty(result.Errors);
    }

    [Fact]
    public void Help_OfTheProgram_NamesTheCommands()
    {
        var result = StreamLogitProcess.Run("--help");

        Assert.Equal(0, result.ExitCode);
        Assert.All(["run", "replay", "fit", "check", "show", "synth"], name => Assert.Contains($"\n  {name} ", result.Output, StringComparison.Ordinal));
        Assert.Contains("\n  streamlogit ", result.Output, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("--help")]
    [InlineData("check --help")]
    public void Help_InAPipe_HasNoEscapes(string arguments) =>
        Assert.DoesNotContain('\u001b', StreamLogitProcess.Run(arguments.Split(' ')).Output);

    [Theory]
    [InlineData("", "command")]
    [InlineData("frob", "'frob'")]
    [InlineData("synth", "argument")]
    [InlineData("synth tram-tickets", "ferry-tickets")]
    [InlineData("synth ferry-tickets --record 5", "'--record'")]
    [InlineData("synth ferry-tickets --records five", "'five'")]
    [InlineData("synth ferry-tickets --records -1", "'-1'")]
    [InlineData("synth ferry-tickets --records 1 --records 2", "--records")]
    [InlineData("synth ferry-tickets --records 9000000000000 --events-per-day 1", "9999")]
    [InlineData("check @arguments", "@arguments")]
    public void CommandLine_Wrong_ExitsWith2AndSaysWhat(string arguments, string said)
    {
        var result = StreamLogitProcess.Run(arguments.Split(' ', StringSplitOptions.RemoveEmptyEntries));

        Assert.Equal(2, result.ExitCode);
        Assert.Empty(result.Output);
        Assert.StartsWith("streamlogit: ", result.Errors, StringComparison.Ordinal);
        Assert.Contains(said, result.Errors, StringComparison.Ordinal);
        Assert.DoesNotContain("   at ", result.Errors, StringComparison.Ordinal);
    }
}
