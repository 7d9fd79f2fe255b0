using System.Text.Json;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class SynthCommandTests
{
    [Theory]
    [InlineData("ferry-tickets")]
    [InlineData("pump-stations")]
    public void Synth_WithoutOptions_GivesTheDemoStream(string scenario)
    {
        var result = StreamLogitProcess.Run("synth", scenario);

        Assert.Equal(0, result.ExitCode);
        Assert.Empty(result.Errors);
        Assert.True(result.OutputBytes.AsSpan().SequenceEqual(File.ReadAllBytes(DemoStreams.File($"{scenario}.jsonl"))));
    }

    [Fact]
    public void Synth_Truth_StandsOnStandardErrorOnly()
    {
        var plain = StreamLogitProcess.Run("synth", "pump-stations", "--records", "5000", "--seed", "3");
        var told = StreamLogitProcess.Run("synth", "pump-stations", "--records", "5000", "--seed", "3", "--truth");

        Assert.Equal(plain.OutputBytes, told.OutputBytes);
        var truth = told.Errors.Split('\n').Where(line => line.Length > 0).Select(line => line.Split('\t')).ToDictionary(row => row[0], row => row[1]);
        Assert.Equal(5000, int.Parse(truth["events"]) + int.Parse(truth["labels"]));
        Assert.InRange(double.Parse(truth["log-loss of the true probabilities"]), 0.01, 0.9 * double.Parse(truth["log-loss of the base rate"]));
    }

    [Fact]
    public void Synth_TruthField_IsInEveryEvent()
    {
        var result = StreamLogitProcess.Run("synth", "ferry-tickets", "--records", "300", "--truth-field", "chance");

        var records = result.Output.Split('\n', StringSplitOptions.RemoveEmptyEntries).Select(line => JsonSerializer.Deserialize<JsonElement>(line)).ToList();
        Assert.Equal(300, records.Count);
        Assert.All(records, record => Assert.NotEqual(record.TryGetProperty("label", out _), record.TryGetProperty("chance", out _)));
    }
}
