using System.CommandLine;
using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Worker.Commands;

/// <summary><c>check</c>: says whether a definition can be used, and what it means.</summary>
internal static class CheckCommand
{
    public static Command Create()
    {
        var command = new ExampleCommand(
            "check",
            "Checks a stream definition and says in plain words what it means",
            "streamlogit check demo-streams/ferry-tickets.json",
            "streamlogit check demo-streams/ferry-tickets.json --set learning.publish=blend");
        var input = new DefinitionInput(command);
        command.SetAction(result =>
        {
            foreach (string line in DefinitionInWords.Describe(input.Read(result, DefinitionUse.Replay))) Console.Out.WriteLine(line);
            return ExitCode.Done;
        });
        return command;
    }
}
