namespace StreamLogit.Pipeline.Transactions;

/// <summary>Records of one origin that followed each other in the merged order of a stream.</summary>
/// <param name="Span">Of which origin, as its place among the spans of the journal's entry.</param>
/// <param name="Count">How many.</param>
public readonly record struct OrderRun(int Span, int Count);
