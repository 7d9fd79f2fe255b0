namespace StreamLogit.Worker;

/// <summary>The exit codes of the program.</summary>
internal static class ExitCode
{
    /// <summary>Done.</summary>
    public const int Done = 0;

    /// <summary>Failed at run time, or stopped before it was done.</summary>
    public const int Failed = 1;

    /// <summary>Wrong input: the command line, the definition, a recording or a state that belongs to another definition.</summary>
    public const int WrongInput = 2;
}
