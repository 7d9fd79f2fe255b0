using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Crashes;

public sealed class FullDiskTests(UndisturbedRun undisturbed) : IClassFixture<UndisturbedRun>
{
    [Fact]
    public void Run_NoRoomForScores_SaysSoAndResumesWithRoom()
    {
        Assert.SkipUnless(File.Exists("/dev/full"), "There is no device that is always full here.");
        using var full = new WorkerFolder();
        File.Copy(undisturbed.Folder.Recording, full.Recording);
        // The device that is always full.
        File.CreateSymbolicLink(full.Scores, "/dev/full");

        var failed = StreamLogitProcess.Run(UndisturbedRun.Arguments(full, 500));
        File.Delete(full.Scores);
        var resumed = StreamLogitProcess.Run(UndisturbedRun.Arguments(full, 500));

        Assert.Equal(1, failed.ExitCode);
        Assert.Empty(failed.Output);
        Assert.Contains("no room left on the disk", failed.Errors, StringComparison.Ordinal);
        Assert.DoesNotContain("   at ", failed.Errors, StringComparison.Ordinal);
        Assert.Equal(0, resumed.ExitCode);
        Assert.Equal(File.ReadAllBytes(undisturbed.Folder.Scores), File.ReadAllBytes(full.Scores));
    }

    [Theory]
    [InlineData(100)]    // the state cannot be made
    [InlineData(700)]    // it can, and a commit fails later
    [InlineData(1_300)]
    [InlineData(2_000)]
    public void Run_FilesLimited_FailsCleanlyAndResumesWithoutTheLimit(int mostKibibytesOfAFile)
    {
        using var limited = new WorkerFolder();
        File.Copy(undisturbed.Folder.Recording, limited.Recording);

        var failed = RunLimited(mostKibibytesOfAFile, UndisturbedRun.Arguments(limited, 500));
        var resumed = StreamLogitProcess.Run(UndisturbedRun.Arguments(limited, 500));

        Assert.Equal(1, failed.ExitCode);
        Assert.Empty(failed.Output);
        Assert.Contains("streamlogit: ", failed.Errors, StringComparison.Ordinal);
        Assert.DoesNotContain("   at ", failed.Errors, StringComparison.Ordinal);
        Assert.Equal(0, resumed.ExitCode);
        Assert.Equal(File.ReadAllBytes(undisturbed.Folder.Scores), File.ReadAllBytes(limited.Scores));
        Assert.Equal(undisturbed.Model, StreamLogitProcess.Run("show", limited.State, "--json").Output);
    }

    // A limit on the length of files makes writes fail midway like a disk that fills up, without a disk of one's own. The signal that
    // comes with it is ignored, and the runtime told not to make large files of its own in memory.
    private static ProgramResult RunLimited(int kibibytes, string[] arguments)
    {
        using var process = StreamLogitProcess.Start(
            "bash", ["-c", $"trap '' XFSZ; ulimit -f {kibibytes}; exec dotnet \"$@\"", "bash", StreamLogitProcess.Program, .. arguments],
            [("DOTNET_EnableWriteXorExecute", "0")], []);
        return process.WaitForEnd();
    }
}
