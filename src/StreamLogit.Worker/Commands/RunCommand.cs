using System.CommandLine;
using StreamLogit.Kafka;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Options.Kafka;
using StreamLogit.Worker.Hosting;
using StreamLogit.Worker.Output;
using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Commands;

/// <summary><c>run</c>: the worker.</summary>
internal static class RunCommand
{
    public static Command Create()
    {
        var command = new ExampleCommand(
            "run",
            "Scores the stream of a definition, learns from its labels, and goes on where the last run committed",
            "streamlogit run demo-streams/pump-stations.json --until-end",
            "streamlogit run demo-streams/ferry-tickets.json --speed 86400x --set state.folder=out/slow");
        var input = new DefinitionInput(command);
        var untilEnd = new Option<bool>("--until-end") { Description = "Stop at the end of the source, also where the definition says to follow it; of topics, where they end now" };
        var speed = SpeedOption.Create();
        command.Add(untilEnd);
        command.Add(speed);
        command.SetAction((result, _) => RunAsync(input.Read(result, DefinitionUse.Run), result.GetValue(untilEnd), SpeedOption.Factor(result.GetValue(speed))));
        return command;
    }

    private static async Task<int> RunAsync(StreamDefinition definition, bool untilEnd, double? speed)
    {
        if (untilEnd) definition = definition with { Source = UntilEnd(definition.Source) };
        foreach (string caution in Cautions.Lines) Console.Error.WriteLine($"Caution: {caution}");

        var setup = WorkerSetup.Read(definition);
        var options = new LoopOptions { Speed = speed, LargestCoefficients = setup.Page is null ? 0 : CoefficientTables.Kept };
        using var log = WorkerLog.Create();
        var ends = KafkaEnds.Open(definition, TimeProvider.System, log.CreateLogger("StreamLogit.Kafka"));
        using var run = new StreamRun(definition, ends, options, TimeProvider.System);
        await WorkProgress.ShowAsync(
            $"scoring {definition.Engine.Stream}", "records",
            () => (run.Progress.Source.Share(), run.Progress.Records),
            async () =>
            {
                await WorkerHost.RunAsync(run, setup);
                return true;
            });
        HealthTables.Write(run.Health, Terminal.Output);
        Console.Error.WriteLine($"Scores: {definition.Scores!.InWords}");
        Console.Error.WriteLine($"State: {definition.State!.Folder} (look into it with: streamlogit show {definition.State.Folder})");
        return ExitCode.Done;
    }

    private static SourceOptions? UntilEnd(SourceOptions? source) => source switch
    {
        FileSourceOptions file => file with { Follow = false },
        KafkaSourceOptions topics => topics with { UntilEnd = true },
        _ => source,
    };
}
