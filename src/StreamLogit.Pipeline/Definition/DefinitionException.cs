using System.Collections.Immutable;

namespace StreamLogit.Pipeline.Definition;

/// <summary>A stream definition cannot be used. Carries everything that is wrong with it.</summary>
public sealed class DefinitionException : Exception
{
    /// <summary>A definition with these errors, at least one.</summary>
    public DefinitionException(ImmutableArray<DefinitionError> errors) : base(string.Join('\n', errors)) => Errors = errors;

    /// <summary>The errors, those of the file first and in its order. <see cref="Exception.Message"/> lists them one a line.</summary>
    public ImmutableArray<DefinitionError> Errors { get; }
}
