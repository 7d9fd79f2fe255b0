namespace StreamLogit.Engine.Persistence;

/// <summary>A saved state cannot be taken up: it is damaged, or it belongs to another definition.</summary>
public sealed class InvalidStateException(string message) : Exception(message);
