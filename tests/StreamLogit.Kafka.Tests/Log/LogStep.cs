namespace StreamLogit.Kafka.Tests.Log;

/// <summary>A call of a client to the test's log, and the moment before or after it is carried out.</summary>
/// <param name="Client">Which client: <c>consumer</c> or <c>producer</c>.</param>
/// <param name="Number">How many calls the client made before, in this process.</param>
/// <param name="IsAfter">Whether the call was carried out.</param>
internal readonly record struct LogStep(string Client, int Number, bool IsAfter);
