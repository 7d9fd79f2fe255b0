using System.CommandLine;
using System.Reflection;
using System.Text.Json;
using StreamLogit.Engine.Health;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay;
using StreamLogit.Pipeline.Replay.Backtest;
using StreamLogit.Pipeline.Replay.Report;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Commands;

/// <summary><c>replay</c>: runs recordings through the engine, compares variants, and reports.</summary>
internal static class ReplayCommand
{
    public static Command Create()
    {
        var command = new ExampleCommand(
            "replay",
            "Runs recordings through the same engine at full speed and says how they would have done, and whether a change would have helped",
            "streamlogit replay demo-streams/ferry-tickets.json demo-streams/ferry-tickets.jsonl --set learning.publish=blend --json",
            "streamlogit replay demo-streams/ferry-tickets.json demo-streams/ferry-tickets.jsonl --vary learning.switchRate=0,1e-3 --baselines --out report.html");
        var input = new DefinitionInput(command);
        var recordings = new RecordingInput(command);
        var json = new Option<string?>("--json")
        {
            Description = "Write the result as JSON, to standard output or to a file; without a file, it stands after the recordings",
            HelpName = "FILE",
            Arity = ArgumentArity.ZeroOrOne,
        };
        var backtest = new BacktestInput(command);
        command.Add(json);
        command.SetAction(result =>
        {
            var files = recordings.Files(result);
            var span = recordings.Span(result);
            bool asJson = result.GetResult(json) is not null;
            string? jsonFile = result.GetValue(json);
            string?[] outputs = [.. backtest.Outputs(result), jsonFile];
            CheckOutputs([.. outputs.OfType<string>()], [input.Path(result), .. files.Select(file => file.Path)]);
            return backtest.IsGiven(result)
                ? BacktestAsync(recordings.WithLabelDelay(backtest.Read(result, input), result) with { Span = span }, files, backtest.Report(result), asJson, jsonFile)
                : ReplayAsync(recordings.WithLabelDelay(input.Read(result, DefinitionUse.Replay), result), files, new LoopOptions { Span = span }, asJson, jsonFile);
        });
        return command;
    }

    private static async Task<int> ReplayAsync(
        StreamDefinition definition, FileSourceOptions[] recordings, LoopOptions options, bool asJson, string? jsonFile)
    {
        using var signals = new StopSignals();
        using var replay = new ReplayRun(definition.Engine, recordings, options, TimeProvider.System);
        var result = await WorkProgress.ShowAsync(
            $"replaying {definition.Engine.Stream}", "records",
            () => (replay.Progress.Source.Share(), replay.Progress.Records),
            () => replay.RunAsync(signals.Token));
        RecordingInput.WarnOfOptimism(result.Health.TaughtAtOnce);
        if (asJson) WriteJson(jsonFile, json => WriteMembers(json, result.Health, result.ScoreHash));
        if (!asJson || jsonFile is not null) WriteTables(result.Health, result.ScoreHash);
        return Done(result.IsComplete);
    }

    private static async Task<int> BacktestAsync(BacktestOptions options, FileSourceOptions[] recordings, string? report, bool asJson, string? jsonFile)
    {
        using var signals = new StopSignals();
        var run = new BacktestRun(options, recordings, TimeProvider.System);
        string stream = options.Reference.Definition.Engine.Stream;
        string title = options.Variants.Length == 0 ? $"replaying {stream}" : $"replaying {stream} and {options.Variants.Length} variants";
        var result = await WorkProgress.ShowAsync(title, "records", () => run.Progress, () => run.RunAsync(signals.Token));
        RecordingInput.WarnOfOptimism(result.Reference.Health.TaughtAtOnce);
        if (report is not null) await File.WriteAllTextAsync(report, ReportPage.Write(result, stream, Version));
        if (asJson)
        {
            WriteJson(jsonFile, json =>
            {
                WriteMembers(json, result.Reference.Health, result.Reference.ScoreHash);
                BacktestJson.Write(json, result);
            });
        }
        if (!asJson || jsonFile is not null)
        {
            WriteTables(result.Reference.Health, result.Reference.ScoreHash);
            BacktestTables.Write(result, Terminal.Output);
        }
        return Done(result.IsComplete);
    }

    private static string Version =>
        typeof(ReplayCommand).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion ?? "";

    private static int Done(bool isComplete)
    {
        if (isComplete) return ExitCode.Done;
        Console.Error.WriteLine("streamlogit: stopped before the end of the recordings; the result covers what was replayed by then");
        return ExitCode.Failed;
    }

    // Before hours of work, not after them.
    private static void CheckOutputs(string[] outputs, string[] inputs)
    {
        var taken = inputs.Select(Path.GetFullPath).ToHashSet(StringComparer.Ordinal);
        foreach (string output in outputs)
        {
            string path = Path.GetFullPath(output);
            if (!taken.Add(path)) throw new WrongInputException($"{output} is read, or written to for something else: name another file to write to.");
            if (Directory.Exists(path)) throw new WrongInputException($"{output} is a folder: name a file to write to.");
            Directory.CreateDirectory(Path.GetDirectoryName(path)!);
        }
    }

    private static void WriteJson(string? file, Action<Utf8JsonWriter> writeMembers)
    {
        if (file is null) JsonOutput.Write(WriteObject);
        else JsonOutput.WriteFile(file, WriteObject);

        void WriteObject(Utf8JsonWriter json)
        {
            json.WriteStartObject();
            writeMembers(json);
            json.WriteEndObject();
        }
    }

    private static void WriteMembers(Utf8JsonWriter json, HealthSnapshot health, string scoreHash)
    {
        json.WriteNumber("events", health.Events);
        json.WriteNumber("labelled", health.Labelled);
        json.WriteNumber("rejected", health.Rejected);
        json.WriteNumber("awaiting", health.Awaiting);
        json.WriteBoolean("optimistic", health.TaughtAtOnce > 0);
        json.WriteStartObject("published");
        json.WriteFigure("logLoss", health.Total.LogLoss);
        json.WriteFigure("baseRateLogLoss", health.Total.BaseRateLogLoss);
        json.WriteFigure("brier", health.Total.Brier);
        json.WriteEndObject();
        json.WriteStartArray("settings");
        foreach (var setting in health.Settings)
        {
            json.WriteStartObject();
            json.WriteString("name", setting.Name);
            json.WriteFigure("logLoss", setting.LogLoss);
            json.WriteFigure("brier", setting.Brier);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WritePropertyName("health");
        HealthJson.Write(json, health);
        json.WriteString("scoreHash", scoreHash);
    }

    private static void WriteTables(HealthSnapshot health, string scoreHash)
    {
        HealthTables.Write(health, Terminal.Output);
        Console.Out.WriteLine();
        var table = new ResultTable("hash", "value");
        table.Add("scores", scoreHash);
        table.Write(Terminal.Output);
    }
}
