using System.CommandLine;
using StreamLogit.Kafka;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Options.Kafka;
using StreamLogit.Worker.Hosting;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Commands;

/// <summary><c>publish</c>: sends a recording to the topics that a worker reads.</summary>
internal static class PublishCommand
{
    public static Command Create()
    {
        var command = new ExampleCommand(
            "publish",
            "Sends a recording to the Kafka topics that the definition's source reads: events and labels keyed by their ids, with their own times",
            "streamlogit publish ferry.json yesterday.jsonl.zst --speed 60x",
            "streamlogit synth ferry-tickets --records 100000 | streamlogit publish ferry.json -");
        var input = new DefinitionInput(command);
        var recording = new Argument<string>("RECORDING") { Description = "A file of records, a folder of them or a pattern as '2026-*.jsonl.zst'; - is standard input, JSON Lines" };
        var speed = SpeedOption.Create();
        command.Add(recording);
        command.Add(speed);
        command.SetAction((result, _) => RunAsync(input.Read(result, DefinitionUse.Replay), result.GetRequiredValue(recording), SpeedOption.Factor(result.GetValue(speed))));
        return command;
    }

    private static async Task<int> RunAsync(StreamDefinition definition, string recording, double? speed)
    {
        if (definition.Source is not KafkaSourceOptions source) throw new WrongInputException("The source of the definition is no Kafka topic: there is nowhere to publish to.");
        using var log = WorkerLog.Create();
        var records = RecordingSource.OpenAll(new FileSourceOptions(recording, FormatOf(recording)), definition.Engine.Record.MaximumBytes, TimeProvider.System);
        using var signals = new StopSignals();
        using var run = new CopyRun(definition, records, KafkaEnds.OpenRecordSink(definition, TimeProvider.System, log.CreateLogger("StreamLogit.Kafka")), speed, TimeProvider.System);
        long sent = await WorkProgress.ShowAsync(
            $"publishing to {source.Topics[0]}", "records",
            () => (run.Progress.Source.Share(), run.Progress.Records),
            () => run.RunAsync(signals.Token));
        Console.Error.WriteLine($"Published {FigureText.Count(sent)} records to {string.Join(" and ", new[] { source.Topics[0], source.LabelTopic }.OfType<string>())}");
        return ExitCode.Done;
    }

    private static RecordingFormat FormatOf(string recording)
    {
        if (recording == "-") return RecordingFormat.JsonLines;
        if (Directory.Exists(recording) || RecordingNames.IsSeveral(recording)) return RecordingFormat.ByName;
        return RecordingFormats.OfName(recording)
            ?? throw new WrongInputException($"The name {recording} does not tell the format of the recording; {RecordingFormats.KnownNames} would.");
    }
}
