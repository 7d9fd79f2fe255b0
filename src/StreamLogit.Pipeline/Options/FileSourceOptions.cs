namespace StreamLogit.Pipeline.Options;

/// <summary>Records from a file.</summary>
/// <param name="Path">
/// The file; <c>-</c> is standard input; a folder, or a pattern with <c>*</c> or <c>?</c> in its last part, is all its files in the order of their names.
/// </param>
/// <param name="Format">How its records are written.</param>
/// <param name="Follow">Whether to wait for more at its end, as another program writes it, until the run is stopped. Default false.</param>
public sealed record FileSourceOptions(string Path, RecordingFormat Format, bool Follow = false) : SourceOptions;
