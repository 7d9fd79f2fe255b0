using System.CommandLine;

namespace StreamLogit.Worker.Commands;

/// <summary>A command whose help shows how it is used.</summary>
internal sealed class ExampleCommand(string name, string description, params string[] examples) : Command(name, description)
{
    /// <summary>Command lines that work.</summary>
    public IReadOnlyList<string> Examples { get; } = examples;
}
