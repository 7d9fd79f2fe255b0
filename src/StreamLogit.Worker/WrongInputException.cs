namespace StreamLogit.Worker;

/// <summary>What the user gave cannot be used. The message says what would be right.</summary>
internal sealed class WrongInputException(string message) : Exception(message);
