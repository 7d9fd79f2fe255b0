using Spectre.Console;

namespace StreamLogit.Worker.Output;

/// <summary>One of the program's two outputs, and whether a person looks at it.</summary>
/// <param name="Writer">Where text goes.</param>
/// <param name="IsInteractive">Whether it is a terminal, which gets drawn tables and progress; anything else gets plain text.</param>
internal sealed record Terminal(TextWriter Writer, bool IsInteractive)
{
    /// <summary>Standard output: results.</summary>
    public static Terminal Output { get; } = new(Console.Out, !Console.IsOutputRedirected && CanDraw);

    /// <summary>Standard error: progress and messages.</summary>
    public static Terminal Messages { get; } = new(Console.Error, !Console.IsErrorRedirected && CanDraw);

    private static bool CanDraw => Environment.GetEnvironmentVariable("TERM") != "dumb";

    /// <summary>A console that draws on this output. Only where it is interactive.</summary>
    public IAnsiConsole Draw() => AnsiConsole.Create(new AnsiConsoleSettings { Out = new AnsiConsoleOutput(Writer) });
}
