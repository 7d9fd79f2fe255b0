namespace StreamLogit.Pipeline.Transactions;

/// <summary>What a transaction took of one origin.</summary>
/// <param name="Origin">The origin: a partition of a topic as <c>tickets-3@</c>.</param>
/// <param name="From">The number of the first record.</param>
/// <param name="To">The number behind the last record. Numbers in between may be missing.</param>
public sealed record OriginSpan(string Origin, long From, long To);
