namespace StreamLogit.Kafka.Source;

/// <summary>What becomes of the results of a source's records, which decides where the reading goes on.</summary>
internal enum OutputKind
{
    /// <summary>Scores go to a file, which is cut back to the state: the state decides, even where the group is ahead of it.</summary>
    Files,

    /// <summary>Scores go to a topic, from which nothing can be taken back: what the group has committed is not read again, even by an older state.</summary>
    Topics,

    /// <summary>The same, and the offsets are committed with the scores.</summary>
    Transactions,
}
