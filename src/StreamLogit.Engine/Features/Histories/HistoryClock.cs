namespace StreamLogit.Engine.Features.Histories;

/// <summary>The highest time of any event so far.</summary>
internal sealed class HistoryClock
{
    public long Microseconds { get; private set; } = long.MinValue;

    public void Advance(long timeMicroseconds) => Microseconds = Math.Max(Microseconds, timeMicroseconds);
}
