namespace StreamLogit.Engine.Health.Alarms;

/// <summary>An alarm was raised or fell quiet.</summary>
/// <param name="Number">Its number among all changes of all alarms, from 1, so that whoever passes them on knows which are new.</param>
/// <param name="Name">The alarm.</param>
/// <param name="AtMicroseconds">When, on the stream's clock.</param>
/// <param name="IsRaised">Whether it was raised; else it fell quiet.</param>
/// <param name="Value">The metric.</param>
/// <param name="Sentence">What is wrong, or that it is over, with its numbers.</param>
public sealed record AlarmChange(long Number, string Name, long AtMicroseconds, bool IsRaised, double Value, string Sentence);
