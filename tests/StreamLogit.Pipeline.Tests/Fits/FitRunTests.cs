using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Fitting;
using StreamLogit.Pipeline.Fits;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Fits;

public sealed class FitRunTests : IDisposable
{
    private static readonly EngineDefinition Launches = new()
    {
        Stream = "launches",
        Record = new RecordOptions { Id = "launch", Label = "fail" },
        Features = [new NumberFeature("temp", NumberScale.None)],
        Learning = new LearningOptions { Slots = 16 },
    };

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Run_ORings_GivesThePublishedFit()
    {
        var fit = await FitAsync(Launches, _folder.Write("launches.jsonl", string.Concat(LaunchRows().Select(Labelled))));

        // Dalal, Fowlkes & Hoadley, JASA 84 (1989) 945; more digits by R 4.2.2 (glm).
        Assert.Equal(FitOutcome.Converged, fit.Outcome);
        Assert.Equal(["intercept", "temp"], fit.Coefficients.Select(c => c.Name));
        Assert.Equal(15.0429016477024, fit.Coefficients[0].Estimate, 1e-6);
        Assert.Equal(-0.232162744218596, fit.Coefficients[1].Estimate, 1e-8);
        Assert.Equal(0.108236521649207, fit.Coefficients[1].StandardError, 1e-7);
        Assert.Equal(20.3151926878668, fit.Deviance, 1e-9);
        Assert.Equal(28.2671527342935, fit.NullDeviance, 1e-9);
        Assert.Equal(fit.Coefficients[1].Estimate, Assert.Single(fit.Model!.Coefficients).Value);
    }

    [Fact]
    public async Task Run_LateAndCorrectedLabels_GivesTheSameFit()
    {
        var lines = new List<string>();
        foreach (var (launch, temperature, fail) in LaunchRows())
        {
            // Every label comes after the last event; some are wrong first.
            lines.Insert(0, $$"""{"launch":{{launch}},"time":"1981-01-01T00:{{launch:00}}:00Z","temp":{{temperature}}}""");
            if (launch % 4 == 0) lines.Add($$"""{"launch":{{launch}},"time":"1981-01-01T01:00:00Z","fail":{{1 - fail}}}""");
            lines.Add($$"""{"launch":{{launch}},"time":"1981-01-01T02:00:00Z","fail":{{fail}}}""");
        }
        lines.Add("""{"launch":99,"time":"1981-01-01T00:00:00Z","temp":1000}"""); // never labelled
        var fit = await FitAsync(Launches, _folder.Write("late.jsonl", string.Join('\n', lines)));
        Assert.Equal(23, fit.Rows);
        Assert.Equal(15.0429016477024, fit.Coefficients[0].Estimate, 1e-6);
        Assert.Equal(20.3151926878668, fit.Deviance, 1e-9);
    }

    [Fact]
    public async Task Run_SeparatedLabels_SaysSoAndHasNoModel()
    {
        string path = _folder.Write("separated.jsonl", string.Concat(LaunchRows().Where(l => l.Fail == 1 == l.Temperature < 65).Select(Labelled)));
        var fit = await FitAsync(Launches, path);
        Assert.Equal(FitOutcome.PerfectSeparation, fit.Outcome);
        Assert.Null(fit.Model);
        Assert.StartsWith("'temp' separates the labels perfectly: every row with 'temp' up to 63 has label 1", Assert.Single(fit.Findings), StringComparison.Ordinal);

        var penalised = await FitAsync(Launches, path, l2: 1);
        Assert.Equal(FitOutcome.Converged, penalised.Outcome);
        Assert.NotNull(penalised.Model);
        Assert.True(double.IsNaN(penalised.Coefficients[1].P));
        Assert.True(penalised.Coefficients[1].StandardError > 0);
    }

    [Fact]
    public async Task Run_TooManyCoefficients_SaysWhatToDo()
    {
        var definition = Launches with { Features = [new CategoryFeature(["launch"])], Learning = new LearningOptions { Slots = 1 << 16 } };
        string path = _folder.Write("many.jsonl", string.Concat(Enumerable.Range(0, 1200).Select(i => Labelled((i, i, i % 2)))));
        var exception = await Assert.ThrowsAsync<PipelineException>(() => FitAsync(definition, path));
        Assert.Contains("fit with a penalty, --l2 1", exception.Message, StringComparison.Ordinal);
        Assert.Equal(FitOutcome.Converged, (await FitAsync(definition, path, l2: 1)).Outcome);
    }

    [Fact]
    public async Task Run_ThenReplayFromTheFile_ScoresWithTheFit()
    {
        var fit = await FitAsync(Launches, _folder.Write("launches.jsonl", string.Concat(LaunchRows().Select(Labelled))));
        Pipeline.Definition.WarmStartFile.Write(_folder["fit.json"], fit.Model!);
        var definition = Pipeline.Definition.StreamDefinitionReader.ReadFile(_folder.Write("launches.json", """
            {
              "stream": "launches", "record": { "id": "launch", "label": "fail" }, "features": [ { "number": "temp" } ],
              "learning": { "slots": 16, "warmStart": "fit.json", "startProbability": 0.1, "bank": [ { "update": "sgd", "step": 1e-9 } ] }
            }
            """));
        Assert.Equal(_folder["fit.json"], definition.WarmStartPath);

        // With next to no learning the replay's log-loss is the fit's.
        using var replay = new Pipeline.Replay.ReplayRun(
            definition.Engine, [new FileSourceOptions(_folder["launches.jsonl"], RecordingFormat.JsonLines)], new LoopOptions(), TimeProvider.System);
        var result = await replay.RunAsync(TestContext.Current.CancellationToken);
        Assert.Equal(20.3151926878668 / 2 / 23, result.Health.Total.LogLoss, 1e-5);
    }

    private static async Task<FitResult> FitAsync(EngineDefinition definition, string path, double? l2 = null)
    {
        using var run = new FitRun(definition, [new FileSourceOptions(path, RecordingFormat.JsonLines)], new LoopOptions(), TimeProvider.System);
        return await run.RunAsync(l2, TestContext.Current.CancellationToken);
    }

    private static IEnumerable<(int Launch, int Temperature, int Fail)> LaunchRows() =>
        File.ReadLines(RepositoryFiles.At("tests", "data", "oring_launch_order.csv")).Skip(1).Select(line => line.Split(','))
            .Select(cells => (Whole(cells[0]), Whole(cells[1]), Whole(cells[4])));

    private static int Whole(string cell) => int.Parse(cell, System.Globalization.CultureInfo.InvariantCulture);

    private static string Labelled((int Launch, int Temperature, int Fail) row) => FormattableString.Invariant(
        $$"""{"launch":{{row.Launch}},"time":"1981-01-01T{{row.Launch / 60:00}}:{{row.Launch % 60:00}}:00Z","temp":{{row.Temperature}},"fail":{{row.Fail}}}""") + "\n";
}
