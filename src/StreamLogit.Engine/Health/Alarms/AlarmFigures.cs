using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Health.Alarms;

/// <summary>How an alarm stands.</summary>
/// <param name="Alarm">The alarm as the definition has it.</param>
/// <param name="IsRaised">Whether it is raised; else it is quiet.</param>
/// <param name="SinceMicroseconds">Since when, on the stream's clock; null before it was looked at first.</param>
/// <param name="Value">The metric when it was looked at last; NaN where it could not be told.</param>
/// <param name="Count">Labels (for metrics of the stream and of drift: events) in the window then.</param>
/// <param name="Sentence">What is wrong, or that nothing is, with its numbers.</param>
public sealed record AlarmFigures(
    AlarmOptions Alarm, bool IsRaised, long? SinceMicroseconds, double Value, long Count, string Sentence);
