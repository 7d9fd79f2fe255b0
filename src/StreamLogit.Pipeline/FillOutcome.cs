namespace StreamLogit.Pipeline;

/// <summary>What came of asking a source for records.</summary>
public enum FillOutcome
{
    /// <summary>There are records in the batch.</summary>
    Filled,

    /// <summary>There is nothing now, and there may be later.</summary>
    Idle,

    /// <summary>There is nothing more.</summary>
    Ended,
}
