namespace StreamLogit.Pipeline;

/// <summary>A record that could not be used, for people to look at.</summary>
/// <param name="Reason">The code of its reason.</param>
/// <param name="Position">Where it came from: <c>file.jsonl:1234</c>.</param>
/// <param name="Detail">What exactly is wrong, or null.</param>
/// <param name="Record">The first bytes of the record as text.</param>
public sealed record RejectExample(string Reason, string Position, string? Detail, string Record);
