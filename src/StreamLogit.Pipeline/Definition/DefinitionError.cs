namespace StreamLogit.Pipeline.Definition;

/// <summary>One thing that is wrong with a stream definition.</summary>
/// <param name="Place">Where it stands.</param>
/// <param name="Path">The path of the value, as <c>learning.bank[0].step</c>; empty for the definition as a whole.</param>
/// <param name="Message">What is wrong and what would be right.</param>
public sealed record DefinitionError(DefinitionPlace Place, string Path, string Message)
{
    /// <summary><c>place: path: message</c> on one line.</summary>
    public override string ToString() => Path.Length == 0 ? $"{Place}: {Message}" : $"{Place}: {Path}: {Message}";
}
