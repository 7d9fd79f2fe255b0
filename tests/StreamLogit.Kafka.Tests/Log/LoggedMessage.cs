namespace StreamLogit.Kafka.Tests.Log;

/// <summary>A message of the test's log, or what a transaction leaves in its place.</summary>
internal sealed record LoggedMessage(byte[]? Key, byte[] Value, LogTransaction? Transaction, bool IsMarker);
