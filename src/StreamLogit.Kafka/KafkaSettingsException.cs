namespace StreamLogit.Kafka;

/// <summary>Settings with which no client can be made: an unknown property, a wrong value, a secret that is not there. No message tells a secret.</summary>
public sealed class KafkaSettingsException(string message, Exception? cause = null) : Exception(message, cause);
