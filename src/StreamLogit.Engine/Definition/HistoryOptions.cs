namespace StreamLogit.Engine.Definition;

/// <summary>The room for histories.</summary>
public sealed record HistoryOptions
{
    /// <summary>
    /// How much memory the rows of all keys may take, in bytes, at least 1 MiB. Beyond it the keys longest unseen are put out and come back when they are seen again;
    /// no result depends on it. Default 256 MiB.
    /// </summary>
    public long MemoryBytes { get; init; } = 256L << 20;
}
