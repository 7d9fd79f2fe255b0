using System.CommandLine;
using System.CommandLine.Help;
using System.CommandLine.Invocation;

namespace StreamLogit.Worker.Commands;

/// <summary>The usual help, followed by the examples of the command.</summary>
internal sealed class ExampleHelp(HelpAction help) : SynchronousCommandLineAction
{
    /// <inheritdoc/>
    public override bool ClearsParseErrors => true;

    /// <inheritdoc/>
    public override int Invoke(ParseResult parseResult)
    {
        int result = help.Invoke(parseResult);
        var output = parseResult.InvocationConfiguration.Output;
        var examples = parseResult.CommandResult.Command is ExampleCommand command ? command.Examples : RootExamples;
        output.WriteLine(examples.Count == 1 ? "Example:" : "Examples:");
        foreach (string example in examples) output.WriteLine($"  {example}");
        return result;
    }

    private static IReadOnlyList<string> RootExamples { get; } = ["streamlogit run demo-streams/pump-stations.json --until-end"];
}
