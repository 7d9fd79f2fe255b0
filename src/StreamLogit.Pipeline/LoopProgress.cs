namespace StreamLogit.Pipeline;

/// <summary>How far a loop has come.</summary>
/// <param name="Records">Records that went all the way through.</param>
/// <param name="Source">How much of the source has been read.</param>
/// <param name="Commits">Commits made.</param>
/// <param name="Transactions">Transactions of the outputs committed.</param>
public readonly record struct LoopProgress(long Records, SourceProgress Source, long Commits, long Transactions = 0);
