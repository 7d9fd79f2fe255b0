namespace StreamLogit.Tests.Contracts;

/// <summary>What a test throws to have a worker die.</summary>
internal sealed class DeathException : Exception;
