using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Worker.Hosting;
using StreamLogit.Worker.Output;
using StreamLogit.Worker.Web.Access;

namespace StreamLogit.Worker.Commands;

/// <summary><c>run</c>: the worker.</summary>
internal static class RunCommand
{
    private const string Unlimited = "max";

    public static Command Create()
    {
        var command = new ExampleCommand(
            "run",
            "Scores the stream of a definition, learns from its labels, and goes on where the last run committed",
            "streamlogit run demo-streams/pump-stations.json --until-end",
            "streamlogit run demo-streams/ferry-tickets.json --speed 86400x --set state.folder=out/slow");
        var input = new DefinitionInput(command);
        var untilEnd = new Option<bool>("--until-end") { Description = "Stop at the end of the source, also where the definition says to follow it" };
        var speed = new Option<double?>("--speed")
        {
            Description = "Let the records' own time pass so many times as fast, as 60x; max, which is as fast as possible, if not given",
            HelpName = "60x|max",
            CustomParser = ReadSpeed,
        };
        command.Add(untilEnd);
        command.Add(speed);
        command.SetAction((result, _) => RunAsync(input.Read(result, DefinitionUse.Run), result.GetValue(untilEnd), result.GetValue(speed) ?? double.PositiveInfinity));
        return command;
    }

    private static async Task<int> RunAsync(StreamDefinition definition, bool untilEnd, double speed)
    {
        if (untilEnd && definition.Source is FileSourceOptions file) definition = definition with { Source = file with { Follow = false } };
        foreach (string caution in Cautions.Lines) Console.Error.WriteLine($"Caution: {caution}");

        var page = definition.Listen is { } listen ? PageAccess.Read(listen) : null;
        using var run = StreamRun.Open(definition, new LoopOptions { Speed = double.IsFinite(speed) ? speed : null }, TimeProvider.System);
        await WorkProgress.ShowAsync(
            $"scoring {definition.Engine.Stream}", "records",
            () => (run.Progress.Source.Share(), run.Progress.Records),
            async () =>
            {
                await WorkerHost.RunAsync(run, page);
                return true;
            });
        HealthTables.Write(run.Health, Terminal.Output);
        Console.Error.WriteLine($"Scores: {definition.Scores!.Path}");
        Console.Error.WriteLine($"State: {definition.State!.Folder} (look into it with: streamlogit show {definition.State.Folder})");
        return ExitCode.Done;
    }

    private static double? ReadSpeed(ArgumentResult result)
    {
        string text = result.Tokens[0].Value;
        if (text == Unlimited) return double.PositiveInfinity;
        bool isFactor = double.TryParse(text.AsSpan().TrimEnd('x'), NumberStyles.AllowDecimalPoint, CultureInfo.InvariantCulture, out double factor);
        if (isFactor && text.EndsWith('x') && factor > 0 && double.IsFinite(factor)) return factor;
        result.AddError($"--speed takes a factor above 0 and an x, as 60x, or max, not '{text}'.");
        return null;
    }
}
