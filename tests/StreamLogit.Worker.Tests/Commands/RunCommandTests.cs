using System.Text.Json;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class RunCommandTests
{
    [Theory]
    [InlineData("ferry-tickets", 0.8)]
    [InlineData("pump-stations", 0.55)]
    public void Run_DemoStream_BeatsTheBaseRateAndEqualsItsReplay(string stream, double mostOfBaseRate)
    {
        using var folder = new WorkerFolder(stream).Demo();

        var run = StreamLogitProcess.Run(folder.RunArguments(5_000, "--until-end"));
        var replay = StreamLogitProcess.Run("replay", folder.Definition, folder.Recording, "--json").Json;

        Assert.Equal(0, run.ExitCode);
        string[] all = run.Table("window").Single(row => row[0] == "all");
        Assert.InRange(double.Parse(all[2]), 0.01, mostOfBaseRate * double.Parse(all[3]));
        Assert.Equal(replay.GetProperty("published").GetProperty("logLoss").GetDouble(), double.Parse(all[2]), 1e-5);
        Assert.Equal(replay.GetProperty("scoreHash").GetString(), folder.ScoreHash());
        Assert.Equal(replay.GetProperty("events").GetInt32(), File.ReadLines(folder.Scores).Count());
        Assert.Empty(File.ReadAllBytes(folder.Rejects));
        // The demo has gone on where it ended: nothing is scored twice.
        var again = StreamLogitProcess.Run(folder.RunArguments(5_000, "--until-end"));
        Assert.Equal(run.Output, again.Output);
        Assert.Equal(replay.GetProperty("scoreHash").GetString(), folder.ScoreHash());
    }

    [Fact]
    public void Run_Demo_SaysTheCautionsOnStandardErrorAndNoEscapesAnywhere()
    {
        using var folder = new WorkerFolder().Synthesize(500, seed: 4);

        var result = StreamLogitProcess.Run(folder.RunArguments(1_000));

        Assert.Equal(3, result.Errors.Split('\n').Count(line => line.StartsWith("Caution: ", StringComparison.Ordinal)));
        Assert.Contains("not a finding about a person or a machine", result.Errors, StringComparison.Ordinal);
        Assert.DoesNotContain('\u001b', result.Output);
        Assert.DoesNotContain('\u001b', result.Errors);
        Assert.DoesNotContain("Caution", result.Output, StringComparison.Ordinal);
    }

    [Fact]
    public void Run_Terminated_StopsWithACommitAndResumesToTheSameBytes()
    {
        using var undisturbed = new WorkerFolder().Synthesize(8_000, seed: 21);
        using var stopped = new WorkerFolder().Synthesize(8_000, seed: 21);
        StreamLogitProcess.Run(undisturbed.RunArguments(1_000));

        // A pace at which the stream takes ten seconds leaves time to stop it.
        using (var worker = StreamLogitProcess.Start(stopped.RunArguments(1_000_000, "--speed", "120000x")))
        {
            worker.WaitForLength(stopped.Scores, 100_000);
            worker.Terminate();
            var result = worker.WaitForEnd();
            Assert.Equal(0, result.ExitCode);
            Assert.Contains("stopped on request", result.Errors, StringComparison.Ordinal);
            Assert.Contains("counted\tnumber\n", result.Output, StringComparison.Ordinal);
        }
        long lengthAtStop = new FileInfo(stopped.Scores).Length;
        Assert.InRange(lengthAtStop, 100_000, new FileInfo(undisturbed.Scores).Length - 1);
        Assert.True(File.ReadAllBytes(stopped.Scores).AsSpan().SequenceEqual(File.ReadAllBytes(undisturbed.Scores).AsSpan(0, (int)lengthAtStop)));

        var resumed = StreamLogitProcess.Run(stopped.RunArguments(1_000, "--speed", "max"));

        Assert.Contains("goes on after ", resumed.Errors, StringComparison.Ordinal);
        Assert.Equal(File.ReadAllBytes(undisturbed.Scores), File.ReadAllBytes(stopped.Scores));
    }

    [Fact]
    public void Run_Garbage_GivesRejectsWithReasonAndPosition()
    {
        using var folder = new WorkerFolder().Synthesize(4_000, seed: 8);
        byte[] bytes = File.ReadAllBytes(folder.Recording);
        var random = new Random(5);
        for (int i = 0; i < 1_500; i++) bytes[random.Next(bytes.Length)] = (byte)random.Next(256);
        File.WriteAllBytes(folder.Recording, [.. bytes, .. "\n\0\0\n[]\n{\"id\":\"x\"}\n"u8]);

        var result = StreamLogitProcess.Run(folder.RunArguments(1_000));

        Assert.Equal(0, result.ExitCode);
        var counted = result.Table("counted").Skip(1).ToDictionary(row => row[0], row => int.Parse(row[1]));
        var rejects = File.ReadLines(folder.Rejects).Select(line => JsonSerializer.Deserialize<JsonElement>(line)).ToList();
        Assert.Equal(counted["rejected"], rejects.Count);
        Assert.InRange(rejects.Count, 500, 2_500);
        Assert.All(rejects, reject =>
        {
            Assert.Matches("^recording.jsonl:[0-9]+$", reject.GetProperty("position").GetString());
            Assert.Matches("^[a-z0-9-]+$", reject.GetProperty("reason").GetString());
        });
        Assert.Equal(["not-json", "not-object", "time-missing"], rejects[^3..].Select(reject => reject.GetProperty("reason").GetString()));
        Assert.Equal(counted["events"], File.ReadLines(folder.Scores).Count());
        Assert.Equal(rejects.Count, result.Table("reject").Skip(1).Sum(row => int.Parse(row[1])));
    }

    [Fact]
    public void Run_StateInUse_ExitsWith1AndLeavesTheOtherAlone()
    {
        using var folder = new WorkerFolder().Synthesize(2_000, seed: 3);
        using var first = StreamLogitProcess.Start(folder.RunArguments(100, "--speed", "1x"));
        first.WaitForMessage("begins with a new state");

        var second = StreamLogitProcess.Run(folder.RunArguments(100));
        var shown = StreamLogitProcess.Run("show", folder.State, "--json");
        first.Terminate();

        Assert.Equal(1, second.ExitCode);
        Assert.Contains("in use by another worker", second.Errors, StringComparison.Ordinal);
        Assert.DoesNotContain("   at ", second.Errors, StringComparison.Ordinal);
        Assert.Equal(0, shown.ExitCode);
        Assert.Equal(0, first.WaitForEnd().ExitCode);
    }

    [Fact]
    public void Run_OtherFeatures_ExitsWith2AndChangesNothing()
    {
        using var folder = new WorkerFolder().Synthesize(1_000, seed: 3);
        StreamLogitProcess.Run(folder.RunArguments(100));
        byte[] scores = File.ReadAllBytes(folder.Scores);

        var result = StreamLogitProcess.Run(folder.RunArguments(100, "--set", "learning.slots=2048"));

        Assert.Equal(2, result.ExitCode);
        Assert.Equal(scores, File.ReadAllBytes(folder.Scores));
    }

    [Theory]
    [InlineData("60")]
    [InlineData("0x")]
    [InlineData("-1x")]
    [InlineData("fast")]
    [InlineData("xx")]
    [InlineData("1e3x")]
    public void Run_WrongSpeed_ExitsWith2(string speed)
    {
        var result = StreamLogitProcess.Run("run", DemoStreams.File("pump-stations.json"), "--speed", speed);

        Assert.Equal(2, result.ExitCode);
        Assert.Contains($"'{speed}'", result.Errors, StringComparison.Ordinal);
    }

    [Fact]
    public void Run_SourceMissing_ExitsWith2()
    {
        using var folder = new WorkerFolder();

        var result = StreamLogitProcess.Run(folder.RunArguments(100));

        Assert.Equal(2, result.ExitCode);
        Assert.Contains("does not exist", result.Errors, StringComparison.Ordinal);
    }
}
