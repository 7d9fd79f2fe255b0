using System.CommandLine;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Commands;

/// <summary><c>replay</c>: runs recordings through the engine and reports.</summary>
internal static class ReplayCommand
{
    public static Command Create()
    {
        var command = new ExampleCommand(
            "replay",
            "Runs recordings through the same engine at full speed, writes no scores, and says how they would have done",
            "streamlogit replay demo-streams/ferry-tickets.json demo-streams/ferry-tickets.jsonl --set learning.publish=blend --json");
        var input = new DefinitionInput(command);
        var recordings = new Argument<string[]>("RECORDING")
        {
            Description = "Files of records, folders of them or patterns as '2026-*.jsonl.zst', in the order in which they are to be read; - is standard input",
            Arity = ArgumentArity.OneOrMore,
        };
        var format = new Option<string?>("--format") { Description = "The format of recordings whose names do not tell it" };
        format.AcceptOnlyFromAmong("jsonl", "csv", "parquet");
        var json = new Option<bool>("--json") { Description = "Write the result as JSON" };
        command.Add(recordings);
        command.Add(format);
        command.Add(json);
        command.SetAction((result, _) => RunAsync(
            input.Read(result, DefinitionUse.Replay),
            [.. result.GetRequiredValue(recordings).SelectMany(path => RecordingNames.Find(new FileSourceOptions(path, FormatOf(path, result.GetValue(format)))))],
            result.GetValue(json)));
        return command;
    }

    private static async Task<int> RunAsync(StreamDefinition definition, FileSourceOptions[] recordings, bool asJson)
    {
        using var signals = new StopSignals();
        using var replay = new ReplayRun(definition.Engine, recordings, new LoopOptions(), TimeProvider.System);
        var result = await WorkProgress.ShowAsync(
            $"replaying {definition.Engine.Stream}", "records",
            () => (replay.Progress.Source.Share(), replay.Progress.Records),
            () => replay.RunAsync(signals.Token));
        if (asJson) WriteJson(result);
        else WriteTables(result);
        return ExitCode.Done;
    }

    private static RecordingFormat FormatOf(string path, string? format) => format switch
    {
        "jsonl" => RecordingFormat.JsonLines,
        "csv" => RecordingFormat.Csv,
        "parquet" => RecordingFormat.Parquet,
        _ when Directory.Exists(path) || RecordingNames.IsSeveral(path) => RecordingFormat.ByName,
        _ => RecordingFormats.OfName(path) ?? throw new WrongInputException(
            $"The name {path} does not tell the format of the recording ({RecordingFormats.KnownNames} would): add --format jsonl, csv or parquet."),
    };

    private static void WriteJson(ReplayResult result) => JsonOutput.Write(json =>
    {
        var health = result.Health;
        json.WriteStartObject();
        json.WriteNumber("events", health.Events);
        json.WriteNumber("labelled", health.Labelled);
        json.WriteNumber("rejected", health.Rejected);
        json.WriteNumber("awaiting", health.Awaiting);
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
        json.WriteString("scoreHash", result.ScoreHash);
        json.WriteEndObject();
    });

    private static void WriteTables(ReplayResult result)
    {
        HealthTables.Write(result.Health, Terminal.Output);
        Console.Out.WriteLine();
        var table = new ResultTable("hash", "value");
        table.Add("scores", result.ScoreHash);
        table.Write(Terminal.Output);
    }
}
