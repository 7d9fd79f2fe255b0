namespace StreamLogit.Pipeline.Definition;

/// <summary>What a definition is read for, which decides the sections that it must have.</summary>
public enum DefinitionUse
{
    /// <summary>To replay recordings, which are named apart: source, outputs and state may be absent.</summary>
    Replay,

    /// <summary>To fit coefficients, or to look at what a worker keeps: as for <see cref="Replay"/>, but the file of a warm start is not read.</summary>
    Fit,

    /// <summary>To run a worker: <c>source</c>, <c>scores.file</c> and <c>state</c> must be there.</summary>
    Run,
}
