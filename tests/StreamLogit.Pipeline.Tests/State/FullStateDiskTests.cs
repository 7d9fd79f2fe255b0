using System.Collections.Immutable;
using System.Diagnostics;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Tests.State;

/// <summary>A disk of 256 KiB, which only root can make; without it these tests are skipped and say so.</summary>
public sealed class FullStateDiskTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();
    private readonly bool _isMounted;

    public FullStateDiskTests() => _isMounted = OperatingSystem.IsLinux() && Environment.IsPrivilegedProcess
        && Run("mount", "-t", "tmpfs", "-o", "size=256k", "tmpfs", _folder.Path) == 0;

    public void Dispose()
    {
        if (_isMounted) Assert.Equal(0, Run("umount", _folder.Path));
        _folder.Dispose();
    }

    [Fact]
    public void Commit_FullDisk_SaysSoAndGoesOnWithMoreRoom()
    {
        Assert.SkipUnless(_isMounted, "Only root can mount a small file system for this test.");
        int committed = 0;
        using (var state = StateStore.Open(_folder["state"], "quay", "{}"))
        {
            var error = Assert.Throws<PipelineException>(() =>
            {
                for (; committed < 1000; committed++) state.Commit(Commit(committed));
            });
            Assert.StartsWith("There is no room left on the disk", error.Message, StringComparison.Ordinal);
            Assert.True(committed > 2);
        }

        Assert.Equal(0, Run("mount", "-o", "remount,size=16m", _folder.Path));
        using var again = StateStore.Open(_folder["state"], "quay", "{}");
        var checkpoint = again.Read()!;
        Assert.Equal(committed - 1, checkpoint.Marks["scores"]);
        Assert.Equal(committed, checkpoint.Blocks.Read("bank").Count());
        again.Commit(Commit(committed));
        Assert.Equal(committed + 1, again.Read()!.Blocks.Read("bank").Count());
    }

    private static Checkpoint Commit(int number)
    {
        var blocks = new StateBlocks();
        blocks.Put("bank", number, new byte[8192]);
        return new Checkpoint(SourcePosition.Start, ImmutableSortedDictionary<string, long>.Empty.Add("scores", number), blocks);
    }

    private static int Run(string program, params string[] arguments)
    {
        using var process = Process.Start(new ProcessStartInfo(program, arguments) { RedirectStandardError = true })!;
        process.StandardError.ReadToEnd();
        process.WaitForExit();
        return process.ExitCode;
    }
}
