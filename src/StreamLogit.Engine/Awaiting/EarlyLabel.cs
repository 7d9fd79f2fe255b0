namespace StreamLogit.Engine.Awaiting;

/// <summary>A label that came before its event, with the record that brought it.</summary>
/// <param name="Id">The id of the event.</param>
/// <param name="Label">0 or 1.</param>
/// <param name="Weight">The weight that the record gives, or NaN.</param>
/// <param name="CameAtMicroseconds">The stream's clock when it came.</param>
/// <param name="Origin">Where its record comes from.</param>
/// <param name="Position">The record's number there.</param>
/// <param name="Record">The bytes of the record.</param>
internal sealed record EarlyLabel(string Id, int Label, double Weight, long CameAtMicroseconds, string Origin, long Position, byte[] Record);
