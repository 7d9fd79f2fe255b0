namespace StreamLogit.Pipeline.Definition;

/// <summary>Where something in a stream definition stands: in its file, or in an override.</summary>
/// <param name="Source">The file as it was named, or the override: <c>--set learning.slots=64</c>.</param>
/// <param name="Line">The line, from 1; 0 where the whole source is meant.</param>
/// <param name="Column">The column in characters (UTF-16 units, as editors count them), from 1; 0 where the whole source is meant.</param>
public readonly record struct DefinitionPlace(string Source, int Line, int Column)
{
    /// <summary>The whole of a source.</summary>
    public DefinitionPlace(string source) : this(source, 0, 0) { }

    /// <summary><c>file:line:column</c>, or the source alone.</summary>
    public override string ToString() => Line == 0 ? Source : FormattableString.Invariant($"{Source}:{Line}:{Column}");
}
