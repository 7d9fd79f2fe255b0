using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Crashes;

/// <summary>
/// A run from beginning to end over a recording of which every hundredth line is spoilt, with which disturbed runs are compared. One feature forgets.
/// </summary>
public sealed class UndisturbedRun : IDisposable
{
    private const int Records = 60_000;

    public UndisturbedRun()
    {
        Folder.Synthesize(Records, seed: 77);
        string[] lines = File.ReadAllLines(Folder.Recording);
        for (int i = 50; i < lines.Length; i += 100) lines[i] = lines[i][..^5];
        File.WriteAllLines(Folder.Recording, lines);

        var run = StreamLogitProcess.Run(Arguments(Folder, Records));
        Assert.Equal(0, run.ExitCode);
        Output = run.Output;
        Assert.InRange(File.ReadLines(Folder.Rejects).Count(), Records / 100, Records / 50);
        Model = StreamLogitProcess.Run("show", Folder.State, "--json").Output;
    }

    internal WorkerFolder Folder { get; } = new();

    /// <summary>What it wrote to standard output: its counts and losses.</summary>
    internal string Output { get; }

    /// <summary>The model at its end, as <c>show --json</c> writes it.</summary>
    internal string Model { get; }

    /// <summary>Arguments of a run that commits after so many records.</summary>
    internal static string[] Arguments(WorkerFolder folder, int commitEvery) => folder.RunArguments(commitEvery, "--set", "features[6].forget=12h");

    public void Dispose() => Folder.Dispose();
}
