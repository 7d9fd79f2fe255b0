using System.Diagnostics;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Crashes;

public sealed class KillTests(UndisturbedRun undisturbed) : IClassFixture<UndisturbedRun>
{
    private const int Kills = 25;

    [Theory]
    [InlineData(100, 101)]   // a commit after every batch, so that many kills fall into one
    [InlineData(5_000, 102)] // long stretches without a commit, so that much must be written again
    public void Run_KilledAgainAndAgain_EndsWithTheBytesOfAnUndisturbedRun(int commitEvery, int seed)
    {
        using var killed = new WorkerFolder();
        File.Copy(undisturbed.Folder.Recording, killed.Recording);
        long wholeLength = new FileInfo(undisturbed.Folder.Scores).Length;
        var random = new Random(seed);
        // Up to four fifths of the stream, so that none is over when its kill comes.
        long[] targets = [.. Enumerable.Range(0, Kills).Select(_ => random.NextInt64(wholeLength * 4 / 5)).Order()];

        int killsAtWork = 0;
        for (int kill = 0; kill < Kills; kill++)
        {
            using var worker = StreamLogitProcess.Start(UndisturbedRun.Arguments(killed, commitEvery));
            bool atStart = kill % 5 == 4;
            if (!atStart)
            {
                worker.WaitForMessage("Stream pump-stations: ");
                worker.WaitForLength(killed.Scores, targets[kill]);
            }
            // Up to half a second while the process starts, or up to four milliseconds, which is about a commit, while it works.
            Spin(TimeSpan.FromMilliseconds(random.NextDouble() * (atStart ? 500 : 4)));
            if (!worker.HasExited) killsAtWork++;
            worker.Kill();
            worker.WaitForEnd();
        }
        Assert.InRange(killsAtWork, Kills - 2, Kills);
        Assert.InRange(new FileInfo(killed.Scores).Length, wholeLength / 4, wholeLength);

        var last = StreamLogitProcess.Run(UndisturbedRun.Arguments(killed, commitEvery));

        Assert.Equal(0, last.ExitCode);
        Assert.Equal(undisturbed.Output, last.Output);
        Assert.True(File.ReadAllBytes(undisturbed.Folder.Scores).AsSpan().SequenceEqual(File.ReadAllBytes(killed.Scores)));
        Assert.True(File.ReadAllBytes(undisturbed.Folder.Rejects).AsSpan().SequenceEqual(File.ReadAllBytes(killed.Rejects)));
        Assert.Equal(undisturbed.Model, StreamLogitProcess.Run("show", killed.State, "--json").Output);
    }

    // A thread that sleeps wakes up too late to hit a commit.
    private static void Spin(TimeSpan duration)
    {
        long start = Stopwatch.GetTimestamp();
        while (Stopwatch.GetElapsedTime(start) < duration) Thread.SpinWait(20);
    }
}
