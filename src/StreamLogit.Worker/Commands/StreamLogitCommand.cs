using System.CommandLine;
using System.CommandLine.Help;

namespace StreamLogit.Worker.Commands;

/// <summary>The whole command line.</summary>
internal static class StreamLogitCommand
{
    public static RootCommand Create()
    {
        var root = new RootCommand("Scores every event of a stream with a logistic model and learns from each label as it arrives.")
        {
            RunCommand.Create(),
            ReplayCommand.Create(),
            RecordCommand.Create(),
            FitCommand.Create(),
            CheckCommand.Create(),
            ShowCommand.Create(),
            SynthCommand.Create(),
            PublishCommand.Create(),
        };
        foreach (var help in root.Options.OfType<HelpOption>()) help.Action = new ExampleHelp((HelpAction)help.Action!);
        return root;
    }
}
