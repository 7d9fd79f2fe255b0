namespace StreamLogit.Engine.Definition;

/// <summary>A window of the stream's clock.</summary>
/// <param name="Name">As the definition writes it: <c>1d</c>.</param>
/// <param name="LengthMicroseconds">Its length, a whole number of minutes.</param>
public sealed record HealthWindow(string Name, long LengthMicroseconds);
