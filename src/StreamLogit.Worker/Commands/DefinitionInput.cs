using System.Collections;
using System.CommandLine;
using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Worker.Commands;

/// <summary>The definition of a command, with what overrides it.</summary>
internal sealed class DefinitionInput
{
    private readonly Argument<string> _path = new("DEFINITION") { Description = "The stream definition, a JSON file" };
    private readonly Option<string[]> _overrides = new("--set")
    {
        Description = "Override a value of the definition, as --set learning.slots=4096; may be given again",
        HelpName = "PATH=VALUE",
    };

    /// <summary>Adds the argument and the option to a command.</summary>
    public DefinitionInput(Command command)
    {
        command.Add(_path);
        command.Add(_overrides);
    }

    /// <summary>The definition's file.</summary>
    public string Path(ParseResult result) => result.GetRequiredValue(_path);

    /// <summary>Reads the definition.</summary>
    /// <param name="result">The command line.</param>
    /// <param name="use">What it is for.</param>
    /// <param name="overrides">Further overrides, which count after those of the command line.</param>
    /// <exception cref="DefinitionException">It cannot be used.</exception>
    public StreamDefinition Read(ParseResult result, DefinitionUse use, IEnumerable<string>? overrides = null) =>
        StreamDefinitionReader.ReadFile(Path(result), [.. result.GetValue(_overrides) ?? [], .. overrides ?? []], Variables(), use);

    private static Dictionary<string, string> Variables() => Environment.GetEnvironmentVariables().Cast<DictionaryEntry>()
        .ToDictionary(variable => (string)variable.Key, variable => (string?)variable.Value ?? "");
}
