using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using StreamLogit.Engine.Fitting;
using StreamLogit.Pipeline;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Fits;
using StreamLogit.Pipeline.Options;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Commands;

/// <summary><c>fit</c>: fits the coefficients to recordings in one go.</summary>
internal static class FitCommand
{
    public static Command Create()
    {
        var command = new ExampleCommand(
            "fit",
            "Fits the coefficients of a definition to recordings by maximum likelihood, and stores them where learning.warmStart says",
            "streamlogit fit demo-streams/pump-stations.json demo-streams/pump-stations.jsonl",
            "streamlogit fit demo-streams/ferry-tickets.json demo-streams/ferry-tickets.jsonl --l2 1 --out tickets-fit.json");
        var input = new DefinitionInput(command);
        var recordings = new RecordingInput(command);
        var l2 = new Option<double?>("--l2")
        {
            Description = "Fit with the penalty L/2 times the sum of the squared coefficients, for categories with many values; 1 is a good start",
            HelpName = "L",
            CustomParser = ReadPenalty,
        };
        var output = new Option<string?>("--out") { Description = "Store the coefficients here instead", HelpName = "FILE" };
        var json = new Option<bool>("--json") { Description = "Write the result as JSON" };
        command.Add(l2);
        command.Add(output);
        command.Add(json);
        command.SetAction((result, _) => RunAsync(
            input.Read(result, DefinitionUse.Fit), recordings.Files(result), new LoopOptions { Span = recordings.Span(result) },
            result.GetValue(l2), result.GetValue(output), result.GetValue(json)));
        return command;
    }

    private static async Task<int> RunAsync(
        StreamDefinition definition, FileSourceOptions[] recordings, LoopOptions options, double? l2, string? output, bool asJson)
    {
        using var signals = new StopSignals();
        using var run = new FitRun(definition.Engine, recordings, options, TimeProvider.System);
        var fit = await WorkProgress.ShowAsync(
            $"fitting {definition.Engine.Stream}", "records",
            () => (run.Progress.Source.Share(), run.Progress.Records),
            () => run.RunAsync(l2, signals.Token));
        if (asJson) FitTables.WriteJson(fit);
        else FitTables.Write(fit, Terminal.Output);
        foreach (string finding in fit.Findings) Console.Error.WriteLine(finding);
        if (fit.Model is null)
        {
            Console.Error.WriteLine(fit.Outcome == FitOutcome.OneClass ? "There are no coefficients." : "There are no coefficients. With --l2 1 there would be.");
            return ExitCode.Failed;
        }
        if ((output ?? definition.WarmStartPath) is { } path)
        {
            WarmStartFile.Write(path, fit.Model);
            Console.Error.WriteLine($"Coefficients: {path}");
        }
        return ExitCode.Done;
    }

    private static double? ReadPenalty(ArgumentResult result)
    {
        string text = result.Tokens[0].Value;
        if (double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out double penalty) && penalty > 0 && double.IsFinite(penalty))
            return penalty;
        result.AddError($"--l2 takes a number above 0, not '{text}'.");
        return null;
    }
}
