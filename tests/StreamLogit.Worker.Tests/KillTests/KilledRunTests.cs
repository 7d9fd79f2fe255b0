using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.KillTests;

/// <summary>The program is killed (SIGKILL) while it scores and commits, again and again, and in the end must have lost and doubled nothing.</summary>
public sealed class KilledRunTests : IDisposable
{
    private const int Kills = 20;

    private readonly TemporaryFolder _folder = new();

    public KilledRunTests()
    {
        var synth = StreamLogitProcess.Run("synth", "ferry-tickets", "--records", "50000", "--seed", "7");
        Assert.Equal(0, synth.ExitCode);
        File.WriteAllBytes(_folder["tickets.jsonl"], synth.OutputBytes);
    }

    public void Dispose() => _folder.Dispose();

    // Commits follow each other so closely that many of the kills fall into one.
    private string[] Arguments(string name, string? scores = null) =>
    [
        "run", DemoStreams.File("ferry-tickets.json"),
        "--set", $"source.file={_folder["tickets.jsonl"]}",
        "--set", $"scores.file={scores ?? _folder[name + ".scores.jsonl"]}",
        "--set", $"rejects.file={_folder[name + ".rejects.jsonl"]}",
        "--set", $"state.folder={_folder[name + ".state"]}",
        "--set", "state.everyEvents=1000",
    ];

    [Fact]
    public void Run_KilledAtRandomMoments_LeavesTheScoresAndModelOfAnUndisturbedRun()
    {
        var undisturbed = StreamLogitProcess.Run(Arguments("undisturbed"));
        Assert.Equal(0, undisturbed.ExitCode);
        byte[] scores = File.ReadAllBytes(_folder["undisturbed.scores.jsonl"]);

        var random = new Random(11);
        int killed = 0;
        for (int i = 1; i <= Kills; i++)
        {
            long target = scores.Length * (long)i / (Kills + 1) + random.Next(scores.Length / Kills / 2);
            using var process = StreamLogitProcess.Start(Arguments("killed"));
            while (!process.HasExited && LengthOf("killed.scores.jsonl") < target) Thread.Yield();
            for (int spins = random.Next(2_000_000); spins > 0; spins--) Thread.SpinWait(1);
            if (process.HasExited) break;
            process.Kill();
            killed++;
        }
        var last = StreamLogitProcess.Run(Arguments("killed"));

        Assert.Equal(0, last.ExitCode);
        Assert.True(killed >= Kills - 2, $"The program was killed {killed} times only.");
        Assert.Equal(scores, File.ReadAllBytes(_folder["killed.scores.jsonl"]));
        Assert.Equal(File.ReadAllBytes(_folder["undisturbed.rejects.jsonl"]), File.ReadAllBytes(_folder["killed.rejects.jsonl"]));
        Assert.Equal(undisturbed.Output, last.Output);
        Assert.Equal(
            StreamLogitProcess.Run("show", _folder["undisturbed.state"], "--json").Output,
            StreamLogitProcess.Run("show", _folder["killed.state"], "--json").Output);
    }

    [Fact]
    public void Run_Terminated_CommitsAndGoesOnLater()
    {
        var undisturbed = StreamLogitProcess.Run(Arguments("undisturbed"));
        using (var process = StreamLogitProcess.Start([.. Arguments("stopped"), "--set", "state.everyEvents=1000000"]))
        {
            while (!process.HasExited && LengthOf("stopped.scores.jsonl") == 0) Thread.Yield();
            process.Terminate();
            Assert.Equal(0, process.WaitForEnd().ExitCode);
        }
        Assert.NotEqual(0, LengthOf("stopped.scores.jsonl"));
        var last = StreamLogitProcess.Run(Arguments("stopped"));

        Assert.Equal(undisturbed.Output, last.Output);
        Assert.Equal(File.ReadAllBytes(_folder["undisturbed.scores.jsonl"]), File.ReadAllBytes(_folder["stopped.scores.jsonl"]));
    }

    [Fact]
    public void Run_TwoOnOneState_TheSecondIsRefused()
    {
        using var first = StreamLogitProcess.Start([.. Arguments("both"), "--speed", "1x"]);
        while (!first.HasExited && LengthOf("both.scores.jsonl") == 0) Thread.Yield();

        var second = StreamLogitProcess.Run(Arguments("both"));

        Assert.Equal(1, second.ExitCode);
        Assert.Contains("is in use by another worker", second.Errors, StringComparison.Ordinal);
        first.Terminate();
        Assert.Equal(0, first.WaitForEnd().ExitCode);
    }

    [Fact]
    public void Run_ScoreDiskFull_SaysSoAndFails()
    {
        Assert.SkipUnless(File.Exists("/dev/full"), "There is no /dev/full here.");

        var run = StreamLogitProcess.Run(Arguments("full", scores: "/dev/full"));

        Assert.Equal(1, run.ExitCode);
        Assert.Contains("There is no room left on the disk for /dev/full.", run.Errors, StringComparison.Ordinal);
    }

    private long LengthOf(string name) => new FileInfo(_folder[name]) is { Exists: true } file ? file.Length : 0;
}
