namespace StreamLogit.Engine.Awaiting;

/// <summary>Where an awaiting event lies.</summary>
/// <param name="Segment">The number of its segment, counted from the start of the stream.</param>
/// <param name="Offset">Its first byte there.</param>
internal readonly record struct EventPlace(int Segment, int Offset);
