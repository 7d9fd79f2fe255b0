using System.CommandLine;
using StreamLogit.Kafka;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Worker.Hosting;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Commands;

/// <summary><c>record</c>: records a stream without scoring it.</summary>
internal static class RecordCommand
{
    private const int MostMebibytes = 1 << 16;

    public static Command Create()
    {
        var command = new ExampleCommand(
            "record",
            "Records the source of a definition, compressed, a file for every day; replay reads it. To record what a running worker sees, give its definition a recording",
            "streamlogit record demo-streams/ferry-tickets.json --out out/recorded");
        var input = new DefinitionInput(command);
        var folder = new Option<string>("--out") { Description = "The folder for the recording", HelpName = "FOLDER", Required = true };
        var mebibytes = new Option<int?>("--max-mib")
        {
            Description = "Begin a new file when one has so many MiB; 256 if not given",
            CustomParser = WholeNumber.Between("--max-mib", 1, MostMebibytes),
        };
        command.Add(folder);
        command.Add(mebibytes);
        command.SetAction((result, _) =>
        {
            var options = new RecordingOptions(Path.GetFullPath(result.GetRequiredValue(folder)));
            if (result.GetValue(mebibytes) is { } size) options = options with { MaximumBytes = size * (1L << 20) };
            return RunAsync(input.Read(result, DefinitionUse.Replay), options);
        });
        return command;
    }

    private static async Task<int> RunAsync(StreamDefinition definition, RecordingOptions options)
    {
        if (definition.Source is null) throw new WrongInputException("The definition names no source: there is nothing to record.");
        using var signals = new StopSignals();
        using var log = WorkerLog.Create();
        var source = KafkaEnds.OpenSource(definition, TimeProvider.System, log.CreateLogger("StreamLogit.Kafka"));
        using var run = new CopyRun(definition, source, new RecordingFolder(options), null, TimeProvider.System);
        long records = await WorkProgress.ShowAsync(
            $"recording {definition.Engine.Stream}", "records",
            () => (run.Progress.Source.Share(), run.Progress.Records),
            () => run.RunAsync(signals.Token));
        Console.Error.WriteLine($"Recorded {FigureText.Count(records)} records in {options.Folder}");
        return ExitCode.Done;
    }
}
