using System.Globalization;
using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay;
using StreamLogit.Pipeline.Replay.Backtest;

namespace StreamLogit.Pipeline.Tests.Replay.Backtest;

public sealed class BacktestRunTests : IDisposable
{
    private static readonly EngineDefinition Reference = LoopStream.Engine;
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private static Variant VariantOf(string name, EngineDefinition engine) => new(name, new StreamDefinition { Engine = engine, EffectiveJson = "{}" });

    private FileSourceOptions[] Recording(byte[] bytes) => [new(_folder.Write("quay.jsonl", bytes), RecordingFormat.JsonLines)];

    private static Task<BacktestResult> RunAsync(FileSourceOptions[] recordings, BacktestOptions options) =>
        new BacktestRun(options, recordings, TimeProvider.System).RunAsync(TestContext.Current.CancellationToken);

    private static BacktestOptions Options(params Variant[] variants) =>
        new() { Reference = VariantOf("as it stands", Reference), Variants = [.. variants] };

    private static async Task<ReplayResult> ReplayAsync(FileSourceOptions[] recordings, EngineDefinition engine)
    {
        using var replay = new ReplayRun(engine, recordings, new LoopOptions(), TimeProvider.System);
        return await replay.RunAsync(TestContext.Current.CancellationToken);
    }

    [Fact]
    public async Task Run_Variants_HaveTheBitsAndTheHealthOfReplaysOfTheirOwn()
    {
        var recordings = Recording(LoopStream.Create(12_000));
        Variant[] variants =
        [
            VariantOf("rates", Reference with { Learning = Reference.Learning with { SwitchRate = 0.01 } }),
            VariantOf("bank", Reference with { Learning = Reference.Learning with { Bank = [new SgdSetting(0.05, 0, 1e-6)] } }),
            VariantOf("slots", Reference with { Learning = Reference.Learning with { Slots = 64, HashSeed = 7 } }),
            VariantOf("features", Reference with { Features = [Reference.Features[1], new NumberFeature("amount", NumberScale.Log1p)] }),
            VariantOf("other field", Reference with { Features = [.. Reference.Features, new CategoryFeature(["channel"]), new CategoryFeature(["port"])] }),
            VariantOf("wait", Reference with { Labels = Reference.Labels with { WaitMicroseconds = 600_000_000, Unlabelled = UnlabelledEvents.Negative } }),
            VariantOf("length", Reference with { Record = Reference.Record with { MaximumBytes = 96 } }),
            VariantOf("keep", Reference with { Labels = Reference.Labels with { Keep = new ThinningOptions(0.4, 3) } }),
        ];

        var result = await RunAsync(recordings, Options(variants));

        Assert.True(result.IsComplete);
        foreach (var (variant, lane) in variants.Prepend(VariantOf("as it stands", Reference)).Zip(result.Variants.Prepend(result.Reference)))
        {
            var alone = await ReplayAsync(recordings, variant.Definition.Engine);
            Assert.Equal(alone.ScoreHash, lane.ScoreHash);
            Assert.Equal(
                SnapshotText.Of(alone.Health with { AwaitingBytes = 0 }), SnapshotText.Of(lane.Health with { AwaitingBytes = 0 }));
        }
    }

    [Fact]
    public async Task Run_TwoHundredVariantsInManyPasses_GivesWhatOnePassGives()
    {
        var recordings = Recording(LoopStream.Create(400));
        var learning = Reference.Learning with { Slots = 64, Bank = [new SgdSetting(0.05, 0, 0)] };
        var options = Options([.. Enumerable.Range(0, 200).Select(i =>
            VariantOf($"{i}", Reference with { Learning = learning with { Bank = [new SgdSetting(0.001 * (i + 1), 0, 0)] } }))]);

        var one = await RunAsync(recordings, options with { MemoryBytes = 8L << 30 });
        var many = await RunAsync(recordings, options with { MemoryBytes = 1L << 30 });

        Assert.Equal(1, one.Passes);
        Assert.InRange(many.Passes, 2, 10);
        Assert.Equal(200, one.Variants.Select(variant => variant.ScoreHash).Distinct().Count());
        Assert.Equal(one.Variants.Select(variant => variant.ScoreHash), many.Variants.Select(variant => variant.ScoreHash));
        Assert.Equal(one.Comparison.Variants.AsEnumerable(), many.Comparison.Variants.AsEnumerable());
        Assert.Equal(one.Comparison.Days[0].Variants.AsEnumerable(), many.Comparison.Days[0].Variants.AsEnumerable());
        Assert.Equal(one.Reference.ScoreHash, many.Reference.ScoreHash);
    }

    [Fact]
    public async Task Run_ComparisonOfAll_HasTheLogLossOfHealth()
    {
        var tried = VariantOf("step", Reference with { Learning = Reference.Learning with { Bank = [new SgdSetting(0.2, 0, 0)] } });

        var result = await RunAsync(Recording(LoopStream.Create(5000)), Options(tried));

        Assert.Equal(0, result.LabelsLeftOut);
        Assert.Equal(result.Reference.Health.Labelled, result.Comparison.Count);
        Assert.Equal(result.Reference.Health.Total.LogLoss, result.Comparison.Reference.LogLoss, 1e-12);
        Assert.Equal(result.Variants[0].Health.Total.LogLoss, result.Comparison.Variants[0].Figures.LogLoss, 1e-12);
        Assert.Equal(result.Reference.Health.Total.Brier, result.Comparison.Reference.Brier, 1e-12);
        Assert.Equal(result.Reference.Decisions.Weight, result.Reference.Decisions.Reliability.Sum(bin => bin.Weight), 1e-9);
    }

    [Fact]
    public async Task Run_VariantThatLearnsFewerLabels_LeavesTheOthersOutOfTheComparison()
    {
        var hasty = VariantOf("wait", Reference with { Labels = Reference.Labels with { WaitMicroseconds = 300_000_000 } });

        var result = await RunAsync(Recording(LoopStream.Create(5000)), Options(hasty));

        Assert.True(result.LabelsLeftOut > 0);
        Assert.Equal(result.Reference.Health.Labelled, result.Comparison.Count + result.LabelsLeftOut);
        Assert.Equal(result.Variants[0].Health.Labelled, result.Comparison.Count);
    }

    [Fact]
    public async Task Run_RivalThatAlwaysSaysOneHalf_LosesLnTwoAndChangesNoScore()
    {
        var recordings = Recording(WithRival(LoopStream.CreateClean(3000), _ => "0.5"));

        var result = await RunAsync(recordings, Options() with { RivalField = "theirs" });

        var rival = Assert.Single(result.Baselines);
        Assert.Equal("rival: theirs", rival.Name);
        Assert.Equal(result.Reference.Health.Labelled, rival.Comparison.Count);
        Assert.Equal(Math.Log(2), rival.Comparison.Variants[0].Figures.LogLoss, 1e-12);
        Assert.Equal((await ReplayAsync(recordings, Reference)).ScoreHash, result.Reference.ScoreHash);
    }

    [Fact]
    public async Task Run_RivalOfSomeEvents_IsComparedOnThose()
    {
        string[] values = ["0.2", "\"high\"", "7", "null"];
        var recordings = Recording(WithRival(LoopStream.CreateClean(2000), i => values[i % 4]));

        var result = await RunAsync(recordings, Options() with { RivalField = "theirs" });

        Assert.InRange(Assert.Single(result.Baselines).Comparison.Count, 1, result.Reference.Health.Labelled / 2);
        Assert.InRange(result.RivalUnusable, 1, 1000);
        Assert.Equal(0, result.Reference.Health.Rejected);
    }

    [Fact]
    public async Task Run_Baselines_BaseRateHasTheLogLossOfHealth()
    {
        var result = await RunAsync(Recording(LoopStream.Create(3000)), Options() with { Baselines = true });

        Assert.Equal(["base rate", "nightly refit on 30 days"], result.Baselines.Select(baseline => baseline.Name));
        Assert.Equal(
            result.Reference.Health.Total.BaseRateLogLoss, result.Baselines[0].Comparison.Variants[0].Figures.LogLoss, 1e-12);
    }

    [Fact]
    public async Task Run_Scores_AreThoseOfALiveRun()
    {
        var recordings = Recording(LoopStream.Create(2000));
        await RunAsync(recordings, Options() with { Scores = new FileOutputOptions(_folder["replayed.jsonl"]) });
        using (var live = LoopStream.Open(LoopStream.Definition(_folder), new LoopOptions(), TimeProvider.System))
            await live.RunAsync(TestContext.Current.CancellationToken);

        Assert.Equal(File.ReadAllBytes(_folder["scores.jsonl"]), File.ReadAllBytes(_folder["replayed.jsonl"]));
    }

    [Fact]
    public async Task Run_Stopped_GivesWhatWasReplayed()
    {
        var run = new BacktestRun(Options(VariantOf("same", Reference)), Recording(LoopStream.Create(100)), TimeProvider.System);

        var result = await run.RunAsync(new CancellationToken(canceled: true));

        Assert.False(result.IsComplete);
        Assert.Equal(0, result.Comparison.Count);
    }

    [Fact]
    public async Task Run_Recording_IsNamedByItsHash()
    {
        byte[] bytes = "{}\n"u8.ToArray();

        var result = await RunAsync(Recording(bytes), Options());

        // printf '{}\n' | sha256sum
        Assert.Equal("ca3d163bab055381827226140568f3bef7eaac187cebd76878e0b63e9e442356", Assert.Single(result.Recordings).Sha256);
    }

    [Fact]
    public void Create_StandardInputAndSeveralPasses_Throws() => Assert.Throws<InvalidRecordingException>(() => new BacktestRun(
        Options([.. Enumerable.Range(0, 50).Select(i => VariantOf($"{i}", Reference))]) with { MemoryBytes = 64L << 20 },
        [new FileSourceOptions("-", RecordingFormat.JsonLines)], TimeProvider.System));

    private static byte[] WithRival(byte[] recording, Func<int, string> value)
    {
        var text = new StringBuilder();
        int events = 0;
        foreach (string line in Encoding.UTF8.GetString(recording).Split('\n', StringSplitOptions.RemoveEmptyEntries))
        {
            bool isEvent = line.Contains("\"amount\"", StringComparison.Ordinal);
            text.Append(isEvent ? string.Create(CultureInfo.InvariantCulture, $"{line[..^1]},\"theirs\":{value(events++)}}}") : line).Append('\n');
        }
        return Encoding.UTF8.GetBytes(text.ToString());
    }
}
