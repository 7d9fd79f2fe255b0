namespace StreamLogit.Pipeline.State;

/// <summary>How much of a state one of its parts takes.</summary>
/// <param name="Name">The part: <c>awaiting/segments</c>.</param>
/// <param name="Blocks">Its blocks.</param>
/// <param name="Bytes">Their bytes.</param>
public sealed record StatePart(string Name, long Blocks, long Bytes);
