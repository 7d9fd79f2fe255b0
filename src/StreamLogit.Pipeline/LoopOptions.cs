namespace StreamLogit.Pipeline;

/// <summary>How records are moved; nothing here changes a score.</summary>
public sealed record LoopOptions
{
    /// <summary>The most records that travel together, 1 or more. Default 1024.</summary>
    public int BatchSize { get; init; } = 1024;

    /// <summary>How many batches are under way at once, 1 or more. Default 8.</summary>
    public int Batches { get; init; } = 8;

    /// <summary>
    /// How many times faster than in the recording time passes: 60 gives an hour of records in a minute. Null, the default, is as
    /// fast as possible.
    /// </summary>
    public double? Speed { get; init; }

    /// <summary>Records between two commits, 1 or more. Default 100,000.</summary>
    public int CommitEveryEvents { get; init; } = 100_000;

    /// <summary>Wall time between two commits, above 0. Default 10 s.</summary>
    public TimeSpan CommitEveryTime { get; init; } = TimeSpan.FromSeconds(10);

    /// <summary>Records in a transaction, where there are transactions, 1 or more. Default 10,000.</summary>
    public int TransactionEveryEvents { get; init; } = 10_000;

    /// <summary>Wall time between two transactions, above 0. Default 100 ms.</summary>
    public TimeSpan TransactionEveryTime { get; init; } = TimeSpan.FromMilliseconds(100);

    /// <summary>
    /// Whether the stream ends where the source does, so that labels that still wait for their event become rejects. Default false: a later run may
    /// bring more.
    /// </summary>
    public bool EndsWithSource { get; init; }

    /// <summary>The only records that are taken, by their times. Null, the default, takes all.</summary>
    public RecordSpan? Span { get; init; }

    /// <summary>The least wall time between two health snapshots. Default 250 ms.</summary>
    public TimeSpan HealthEvery { get; init; } = TimeSpan.FromMilliseconds(250);

    /// <summary>How many of the largest coefficients are looked for, now and then. Default 0: none are.</summary>
    public int LargestCoefficients { get; init; }
}
