namespace StreamLogit.Pipeline.Options;

/// <summary>Where a worker records what it sees.</summary>
/// <param name="Folder">The folder of the recordings, which holds nothing else. It is made where it is missing.</param>
/// <param name="MaximumBytes">The size of a file, after compression, at which the next commit begins a new one. Default 256 MiB.</param>
public sealed record RecordingOptions(string Folder, long MaximumBytes = 256L << 20);
