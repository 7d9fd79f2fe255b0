namespace StreamLogit.Engine.Health.Alarms;

/// <summary>A metric as an alarm finds it.</summary>
/// <param name="Value">Its value; NaN where it cannot be told.</param>
/// <param name="Count">Labels in the window, or events for metrics of the stream and of drift.</param>
/// <param name="Subject">What exactly it is about where that is not the whole stream: the feature that drifted, the words of a detector.</param>
internal readonly record struct AlarmReading(double Value, long Count, string? Subject = null);
