namespace StreamLogit.Pipeline.Options;

/// <summary>A file that scores or rejects are written to, one JSON object a line.</summary>
/// <param name="Path">The file. It is made where it is missing; a run that resumes goes on where it stopped.</param>
public sealed record FileOutputOptions(string Path) : OutputOptions
{
    /// <inheritdoc/>
    public override string InWords => Path;
}
